import { test } from "node:test";
import assert from "node:assert/strict";
import { STANDINGS, standing, standingWord, tally, worstAlert, worstFirst } from "../../../../src/Host/Web/wwwroot/model/order.js";

const alert = (severity, state = "unacknowledged", raisedSeconds = 10) => ({ severity, state, raisedSeconds });
const bench = (name, phase, extra = {}) => ({ bench: name, phase, alerts: [], ...extra });

test("standing_OpenCritical_GoesBeforeEverything", () => {
  assert.equal(standing(bench("a", "watching", { alerts: [alert("warning"), alert("critical")], blind: true })), "critical");
});

test("standing_WarningOfABlindBench_KeepsItsName", () => {
  assert.equal(standing(bench("a", "watching", { blind: true, alerts: [alert("warning")] })), "warning");
});

test("standing_BlindBench_IsNotHolding", () => assert.equal(standing(bench("a", "watching", { blind: true })), "blind"));

test("standing_ShelvedOrOver_AsksNobody", () => {
  assert.equal(standing(bench("a", "watching", { alerts: [alert("critical", "shelved"), alert("warning", "normal")] })), "watching");
});

test("standing_AcknowledgedWarning_StillStands", () => {
  assert.equal(standing(bench("a", "watching", { alerts: [alert("warning", "acknowledged")] })), "warning");
});

test("standing_EndedRun_IsItsVerdict", () => {
  assert.equal(standing(bench("a", "ended", { verdict: "passed" })), "passed");
  assert.equal(standing(bench("a", "ended")), "incomplete");
});

test("standing_EveryKey_HasAWord", () => {
  for (const key of STANDINGS) {
    assert.match(standingWord(key), /\S/);
  }
});

test("worstAlert_AmongEquals_TheUnacknowledgedThenTheNewest", () => {
  const old = alert("warning", "acknowledged", 90);
  const first = alert("warning", "unacknowledged", 10);
  const second = alert("warning", "unacknowledged", 20);
  assert.equal(worstAlert({ alerts: [old, first, second] }), second);
});

test("worstFirst_FortyBenches_WorstThenByName", () => {
  const benches = Array.from({ length: 40 }, (_, index) => bench(`bench-${index + 1}`, "watching"));
  benches[20].alerts.push(alert("critical"));
  benches[7].alerts.push(alert("warning"));
  benches[33].blind = true;
  const names = worstFirst(benches).map((item) => item.bench);
  assert.deepEqual(names.slice(0, 5), ["bench-21", "bench-8", "bench-34", "bench-1", "bench-2"]);
  assert.equal(names.at(-1), "bench-40");
});

test("tally_CountsEachStandingOnce", () => {
  const benches = [bench("a", "watching"), bench("b", "watching"), bench("c", "idle")];
  assert.deepEqual(tally(benches), [{ standing: "watching", count: 2 }, { standing: "idle", count: 1 }]);
});
