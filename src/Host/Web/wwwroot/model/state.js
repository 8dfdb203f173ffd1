// What the page knows of the host: built from events alone, so that a page that resumes ends where one that never
// lost its connection would.

import { Trace } from "./trace.js";

/** Nothing is known yet. */
export function empty() {
  return { epoch: null, eventId: null, benches: new Map() };
}

/**
 * Takes one event into the state, in place. Events: `reset` (everything anew), `bench` (one bench's document),
 * `now` (its instruments this moment), `readings` (what came since the last).
 * @returns {string[]} the names of the benches that changed.
 */
export function take(state, type, data, eventId = null) {
  if (eventId !== null) {
    state.eventId = eventId;
  }

  switch (type) {
    case "reset": return reset(state, data);
    case "bench": return [put(state, data).document.bench];
    case "now": return now(state, data);
    case "readings": return readings(state, data);
    default: return [];
  }
}

function reset(state, data) {
  const before = state.benches;
  state.epoch = data.epoch;
  state.benches = new Map();
  for (const document of data.benches) {
    // A trace outlives a reset of the same run, or the drawing would blink; its owner fills the hole from the host.
    const known = before.get(document.bench);
    const sameRun = known && known.document.run === document.run;
    state.benches.set(document.bench, { document, now: document.now ?? null, trace: sameRun ? known.trace : new Trace() });
  }

  return [...state.benches.keys()];
}

function put(state, document) {
  const known = state.benches.get(document.bench);
  const sameRun = known && known.document.run === document.run;
  const bench = { document, now: document.now ?? known?.now ?? null, trace: sameRun ? known.trace : new Trace() };
  state.benches.set(document.bench, bench);
  return bench;
}

function now(state, data) {
  const bench = state.benches.get(data.bench);
  if (!bench) {
    return [];
  }

  bench.now = data;
  return [data.bench];
}

function readings(state, data) {
  const bench = state.benches.get(data.bench);
  if (!bench || bench.document.run !== data.run) {
    return [];
  }

  bench.trace.append(data.seconds, data.amps);
  return [data.bench];
}

/** Gives a bench its trace, as the host keeps it; later `readings` events go on from there. */
export function fill(state, name, answer) {
  const bench = state.benches.get(name);
  if (!bench || bench.document.run !== answer.run) {
    return false;
  }

  const later = bench.trace.after(answer.lastSeconds ?? -Infinity);
  bench.trace = Trace.from(answer);
  bench.whole = true;
  for (const [seconds, amps] of later) {
    bench.trace.append([seconds], [amps]);
  }

  return true;
}
