import { test } from "node:test";
import assert from "node:assert/strict";
import { empty, fill, take } from "../../../../src/Host/Web/wwwroot/model/state.js";

const document = (extra = {}) => ({ bench: "east", run: "r1", phase: "watching", alerts: [], ...extra });
const answer = (seconds, amps) => ({ run: "r1", bucketSeconds: 0, seconds, lowAmps: amps, highAmps: amps, first: { seconds, amps }, lastSeconds: seconds.at(-1) });

function started() {
  const state = empty();
  take(state, "reset", { epoch: "e", benches: [document()] }, "e-1");
  fill(state, "east", answer([0, 1], [0.4, 0.41]));
  return state;
}

test("take_Reset_ForgetsWhatIsGone", () => {
  const state = started();
  take(state, "reset", { epoch: "f", benches: [document({ bench: "west" })] }, "f-1");
  assert.deepEqual([...state.benches.keys()], ["west"]);
  assert.equal(state.eventId, "f-1");
});

test("take_ReadingsTwice_CountsThemOnce", () => {
  const state = started();
  const event = { bench: "east", run: "r1", seconds: [2, 3], amps: [0.42, 0.43] };
  take(state, "readings", event, "e-2");
  take(state, "readings", event, "e-2");
  assert.deepEqual(state.benches.get("east").trace.seconds, [0, 1, 2, 3]);
});

test("take_ReadingsOfAnotherRun_AreRefused", () => {
  const state = started();
  assert.deepEqual(take(state, "readings", { bench: "east", run: "r0", seconds: [2], amps: [9] }), []);
  assert.equal(state.benches.get("east").trace.last, 1);
});

test("take_ResetOfTheSameRun_KeepsTheTrace", () => {
  const state = started();
  take(state, "reset", { epoch: "e", benches: [document()] }, "e-9");
  assert.equal(state.benches.get("east").trace.last, 1);
});

test("take_BenchWithANewRun_DropsTheTrace", () => {
  const state = started();
  take(state, "bench", document({ run: "r2" }), "e-3");
  assert.equal(state.benches.get("east").trace.seconds.length, 0);
});

test("take_NowOfAnUnknownBench_IsPassedOver", () => assert.deepEqual(take(started(), "now", { bench: "north" }), []));

test("fill_AfterReadingsOvertookIt_LosesNone", () => {
  const state = started();
  take(state, "readings", { bench: "east", run: "r1", seconds: [2, 3, 4], amps: [0.4, 0.4, 0.5] });
  fill(state, "east", answer([0, 1, 2], [0.4, 0.41, 0.4]));
  assert.deepEqual(state.benches.get("east").trace.seconds, [0, 1, 2, 3, 4]);
});
