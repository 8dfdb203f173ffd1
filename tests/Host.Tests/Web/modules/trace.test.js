import { test } from "node:test";
import assert from "node:assert/strict";
import { Trace } from "../../../../src/Host/Web/wwwroot/model/trace.js";

function fed(count, perSecond, amps) {
  const trace = new Trace();
  for (let index = 0; index < count; index++) {
    trace.append([index / perSecond], [amps(index)]);
  }

  return trace;
}

test("append_OneHourAtFiftyASecond_StaysBounded", () => {
  const trace = fed(180000, 50, () => 0.4);
  assert.ok(trace.seconds.length <= 1500, `${trace.seconds.length} buckets`);
  assert.ok(trace.recent.length <= 1200);
  assert.equal(trace.first.length, 240);
  assert.equal(trace.last, 179999 / 50);
});

test("append_OneSpike_OutlivesEveryHalving", () => {
  const trace = fed(180000, 50, (index) => (index === 77777 ? 3 : 0.4));
  assert.equal(Math.max(...trace.high), 3);
  assert.ok(Math.min(...trace.low) === 0.4);
});

test("append_LongGap_StaysAGap", () => {
  const trace = fed(20000, 2, (index) => (index > 5000 && index < 9000 ? null : 0.4));
  const gap = trace.low.indexOf(null);
  assert.ok(gap > 0);
  assert.ok(trace.seconds[gap] >= 2400 && trace.seconds[gap] <= 2600);
  assert.ok(trace.seconds[gap + 1] - trace.seconds[gap] > 1500);
});

test("append_Seconds_AlwaysAscend", () => {
  const trace = fed(50000, 10, (index) => (index % 7 === 0 ? null : index % 5));
  for (let index = 1; index < trace.seconds.length; index++) {
    assert.ok(trace.seconds[index] > trace.seconds[index - 1]);
  }
});

test("from_AnAnswer_GoesOnWhereItEnds", () => {
  const trace = Trace.from({ bucketSeconds: 10, seconds: [0, 10], lowAmps: [0.4, 0.4], highAmps: [0.5, 0.5], first: { seconds: [0], amps: [1.2] }, lastSeconds: 17 });
  trace.append([16, 18, 21], [9, 0.6, 0.4]);
  assert.deepEqual(trace.seconds, [0, 10, 21]);
  assert.deepEqual(trace.high, [0.5, 0.6, 0.4]);
});
