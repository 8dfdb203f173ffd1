// The page's words for what the host names by contract.

const SIGNATURES = {
  "hard-short": "Hard short",
  "developing-short": "Developing short",
  runaway: "Runaway",
  "open-circuit": "Open circuit",
  intermittent: "Intermittent contact",
  cycling: "Cycling",
  "slow-inrush": "Slow inrush",
  "off-prediction": "Off prediction",
  "lamp-out": "Lamp out",
  "mains-shift": "Mains shift",
  "meter-silent": "Meter silent",
  "meter-stuck": "Meter stuck",
  "meter-overload": "Meter overload",
};

/** A signature as it stands on the page. */
export const signatureWord = (signature) => SIGNATURES[signature] ?? signature;

const CAUSES = {
  chattering: "Comes and goes",
  "route-down": "Nobody can be told",
  "cut-off": "Cut-off opened",
  "cut-off-down": "Cut-off not reached",
  "store-trouble": "Record in trouble",
  "loop-stuck": "Bench not watched",
  test: "Test",
};

/** What an alert is about: a signature, or something about the watcher itself. */
export const causeWord = (cause) => SIGNATURES[cause] ?? CAUSES[cause] ?? cause;

const STATES = {
  unacknowledged: "nobody has seen it",
  acknowledged: "acknowledged",
  "returned-unacknowledged": "gone again, nobody has seen it",
  "latched-unacknowledged": "gone again, kept until somebody has seen it",
  "latched-acknowledged": "gone again, kept until it is reset",
  shelved: "shelved",
  normal: "over",
};

/** An alert's state in words. */
export const stateWord = (state) => STATES[state] ?? state.replaceAll("-", " ");

const PHASES = {
  idle: "no soak",
  waiting: "waiting for current",
  settling: "settling",
  learning: "learning this unit",
  watching: "watching",
  ended: "ended",
};

export const phaseWord = (phase) => PHASES[phase] ?? phase;

const GAPS = {
  "no-answer": "the meter did not answer",
  "not-a-number": "what came was no number",
  "line-too-long": "a line without end",
  "stale-answer": "an answer to an earlier question",
  "meter-has-no-value": "the meter had no value",
  disconnected: "the connection was gone",
  "port-missing": "the port is not there",
  "permission-denied": "the port may not be opened",
  "port-busy": "another program holds the port",
  stalled: "the service was late",
  "not-stored": "the store could not take it",
};

/** Why there is no reading. */
export const gapWord = (reason) => GAPS[reason] ?? reason.replaceAll("-", " ");

/** A wall time, in this browser's zone. */
export const wallTime = (utc) =>
  utc ? new Date(utc).toLocaleString("en-GB", { year: "numeric", month: "short", day: "numeric", hour: "2-digit", minute: "2-digit" }) : "–";
