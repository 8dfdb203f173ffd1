// Which bench needs a person first. A bench that nobody watches (no readings) comes before one that is merely odd.

/** How a bench stands, worst first; each has its own word and its own shape, so that colour is never needed. */
export const STANDINGS = ["critical", "warning", "blind", "notice", "failed", "incomplete", "settling", "watching", "waiting", "passed", "idle"];

const WORDS = {
  critical: "Switch off",
  warning: "Look at it",
  blind: "No readings",
  notice: "Note",
  settling: "Settling",
  watching: "Holding",
  waiting: "Waiting for current",
  failed: "Failed",
  incomplete: "Incomplete",
  passed: "Passed",
  idle: "Not soaking",
};

const RANKS = { critical: 3, warning: 2, notice: 1 };

/** Alerts that still want somebody: neither shelved nor over and done. */
export function openAlerts(bench) {
  return (bench.alerts ?? []).filter((alert) => alert.state !== "normal" && alert.state !== "shelved");
}

/** The worst alert that is open; those nobody has acknowledged go before the others, then the newest. */
export function worstAlert(bench) {
  const rank = (alert) => RANKS[alert.severity] * 2 + (alert.state === "acknowledged" ? 0 : 1);
  return openAlerts(bench).reduce(
    (worst, alert) =>
      !worst || rank(alert) > rank(worst) || (rank(alert) === rank(worst) && alert.raisedSeconds > worst.raisedSeconds) ? alert : worst,
    null,
  );
}

/** One of STANDINGS. */
export function standing(bench) {
  if (bench.phase === "ended") {
    return bench.verdict ?? "incomplete";
  }

  const worst = worstAlert(bench);
  if (worst?.severity === "critical") {
    return "critical";
  }

  if (bench.phase === "idle") {
    return worst ? "warning" : "idle";
  }

  if (worst?.severity === "warning") {
    return "warning";
  }

  if (bench.blind) {
    return "blind";
  }

  if (worst) {
    return worst.severity;
  }

  if (bench.phase === "waiting") {
    return "waiting";
  }

  return bench.phase === "watching" ? "watching" : "settling";
}

/** The word that stands large on the page. */
export const standingWord = (key) => WORDS[key];

/** Worst first; those that stand alike keep to their names, so that tiles do not jump about. */
export function worstFirst(benches) {
  const place = new Map(STANDINGS.map((key, index) => [key, index]));
  return [...benches].sort(
    (a, b) => place.get(standing(a)) - place.get(standing(b)) || a.bench.localeCompare(b.bench, "en", { numeric: true }),
  );
}

/** How many benches stand how, in the order of STANDINGS, without those that none does. */
export function tally(benches) {
  const counts = new Map();
  for (const bench of benches) {
    counts.set(standing(bench), (counts.get(standing(bench)) ?? 0) + 1);
  }

  return STANDINGS.filter((key) => counts.has(key)).map((key) => ({ standing: key, count: counts.get(key) }));
}
