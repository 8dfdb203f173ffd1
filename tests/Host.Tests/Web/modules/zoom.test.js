import { test } from "node:test";
import assert from "node:assert/strict";
import { around, clamp, fineEnough, keyed, pan, request, zoom } from "../../../../src/Host/Web/wwwroot/model/zoom.js";

const threeDays = { start: 0, end: 259200 };
const length = ({ from, to }) => to - from;

test("zoom_From72HoursToOneSecond_KeepsTheInstantUnderTheCursor", () => {
  const at = 200000;
  let window = { from: 0, to: 259200 };
  const share = at / 259200;
  for (let step = 0; step < 40; step++) {
    window = zoom(window, 0.7, at, threeDays);
    assert.ok(Math.abs((at - window.from) / length(window) - share) < 1e-6);
  }

  assert.equal(Math.round(length(window) * 1e6) / 1e6, 1);
});

test("zoom_Out_StopsAtTheWholeRun", () => {
  assert.deepEqual(zoom({ from: 100, to: 200 }, 1e9, 150, threeDays), { from: 0, to: 259200 });
});

test("clamp_BeyondTheEnd_SlidesBackWithoutShrinking", () => {
  assert.deepEqual(clamp({ from: 259100, to: 259300 }, threeDays), { from: 259000, to: 259200 });
});

test("clamp_RunOfHalfASecond_StillShowsASecond", () => {
  assert.deepEqual(clamp({ from: 0, to: 0.5 }, { start: 0, end: 0.5 }), { from: 0, to: 1 });
});

test("pan_AtTheStart_Stays", () => assert.deepEqual(pan({ from: 0, to: 10 }, -0.2, threeDays), { from: 0, to: 10 }));

test("around_AFinding_PutsItInTheMiddle", () => assert.deepEqual(around(1000, 60, threeDays), { from: 970, to: 1030 }));

test("request_CoversTheWindowAndItsNeighbours", () => {
  const asked = request({ from: 1000, to: 1100 }, threeDays, 800);
  assert.ok(asked.from < 1000 && asked.to > 1100);
  assert.ok(asked.points <= 4096 && asked.points >= 800);
});

test("request_SlightPan_AsksTheSame", () => {
  assert.deepEqual(request({ from: 1000, to: 1100 }, threeDays, 800), request({ from: 1001, to: 1101 }, threeDays, 800));
});

test("request_AnyWindow_IsAnsweredFineEnough", () => {
  for (const [from, to] of [[0, 259200], [5, 6], [100000, 143000], [259199, 259200]]) {
    const asked = request({ from, to }, threeDays, 1000);
    const answer = { ...asked, bucketSeconds: (asked.to - asked.from) / asked.points };
    assert.ok(fineEnough(answer, { from, to }, 1000), `${from} to ${to}`);
  }
});

test("fineEnough_CoarseAnswer_IsNot", () => {
  assert.equal(fineEnough({ from: 0, to: 259200, bucketSeconds: 100 }, { from: 0, to: 3600 }, 1000), false);
});

test("keyed_PlusAndMinus_AreEachOthersOpposite", () => {
  const window = { from: 1000, to: 1200 };
  assert.deepEqual(keyed("-", keyed("+", window, threeDays), threeDays), window);
  assert.equal(keyed("x", window, threeDays), null);
  assert.deepEqual(keyed("Home", window, threeDays), { from: 0, to: 259200 });
  assert.deepEqual(keyed("End", window, threeDays), { from: 259000, to: 259200 });
});
