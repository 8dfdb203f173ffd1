import { test } from "node:test";
import assert from "node:assert/strict";
import { columnsOf, rangeOf, valueAt } from "../../../../src/Host/Web/wwwroot/model/columns.js";

const one = { seconds: [0, 10, 20], lowAmps: [0.4, null, 0.4], highAmps: [0.5, null, 0.6] };
const other = { seconds: [0, 20, 30], lowAmps: [0.3, 0.3, 0.2], highAmps: [0.3, 0.3, 0.2] };

test("columnsOf_TwoRuns_ShareOneAscendingTime_AndKeepGapsApartFromNothing", () => {
  const [seconds, low, high, otherLow] = columnsOf([one, other]);
  assert.deepEqual(seconds, [0, 10, 20, 30]);
  assert.deepEqual(low, [0.4, null, 0.4, undefined]);
  assert.deepEqual(high, [0.5, null, 0.6, undefined]);
  assert.deepEqual(otherLow, [0.3, undefined, 0.3, 0.2]);
});

test("rangeOf_TheWindowAlone_Counts", () => {
  const [low, high] = rangeOf(columnsOf([one]), { from: 15, to: 25 });
  assert.ok(low < 0.4 && low > 0.3);
  assert.ok(high > 0.6 && high < 0.7);
});

test("rangeOf_NothingInside_IsNull", () => assert.equal(rangeOf(columnsOf([one]), { from: 100, to: 200 }), null));

test("rangeOf_WholeRun_LeavesTheSwitchOnOut", () => {
  const seconds = Array.from({ length: 100 }, (_, index) => index * 100);
  const flat = seconds.map((at) => (at === 0 ? 9 : 0.4));
  assert.ok(rangeOf([seconds, flat, flat], { from: 0, to: 10000 })[1] < 1);
  assert.ok(rangeOf([seconds, flat, flat], { from: 0, to: 50 })[1] > 9);
});

test("valueAt_BetweenBuckets_IsTheEarlierOne", () => {
  assert.deepEqual(valueAt(one, 25), { seconds: 20, low: 0.4, high: 0.6 });
  assert.deepEqual(valueAt(one, 12), { seconds: 10, low: null, high: null });
  assert.equal(valueAt(one, -1), null);
});
