import { test } from "node:test";
import assert from "node:assert/strict";
import { clock, count, parts, percent, range, span, withInterval, withUnit } from "../../../../src/Host/Web/wwwroot/model/numbers.js";

const plain = (text) => text.replaceAll("\u00a0", " ");

test("withUnit_BelowOneAmpere_IsInMilliamperes", () => {
  assert.equal(plain(withUnit(0.41234, "A")), "412 mA");
  assert.equal(plain(withUnit(0.00516, "A")), "5.16 mA");
  assert.equal(plain(withUnit(1.0449, "A")), "1.04 A");
});

test("withUnit_AtTheChangeOfUnit_NeverSaysThousandMilliamperes", () => {
  assert.equal(plain(withUnit(0.9996, "A")), "1.00 A");
  assert.equal(plain(withUnit(0.999, "A")), "999 mA");
});

test("withUnit_Nothing_IsADash", () => {
  for (const nothing of [null, undefined, NaN, Infinity]) {
    assert.equal(withUnit(nothing, "V"), "–");
  }
});

test("withUnit_Negative_HasAMinusSign", () => assert.equal(plain(withUnit(-3.2, "V", 2)), "−3.2 V"));

test("parts_Zero_HasNoDecimals", () => assert.deepEqual(parts(0, "W"), { number: "0", unit: "W" }));

test("withInterval_HalfWidthThreeVolts_ShowsTwoDigitsOfIt", () => {
  const { text, interval } = withInterval(83.123, 79.6, 86.5, "V");
  assert.equal(plain(text), "83.1 V");
  assert.equal(plain(interval), "79.6 to 86.5 V");
});

test("withInterval_HalfWidthSixTenths_ShowsOneDigitOfIt", () => {
  assert.equal(plain(withInterval(119.43, 118.8, 120.05, "V").text), "119.4 V");
});

test("withInterval_WideInterval_DoesNotPretend", () => {
  assert.equal(plain(withInterval(212.4, 120, 410, "Ω").text), "212 Ω");
});

test("withInterval_BoundsAlone_SaysBetween", () => {
  const { text, interval } = withInterval(null, 61.2, 103.9, "V");
  assert.equal(text, "–");
  assert.equal(plain(interval), "between 61 and 104 V");
});

test("withInterval_OnlyTheUpperEnd_SaysBelow", () => {
  assert.equal(plain(withInterval(null, null, 18.2, "Ω").text), "< 18 Ω");
});

test("withInterval_Kiloohms_ShareOneUnit", () => {
  const { text, interval } = withInterval(1520, 1450, 1600, "Ω");
  assert.equal(plain(text), "1.52 kΩ");
  assert.equal(plain(interval), "1.45 to 1.60 kΩ");
});

test("range_OfMilliamperes_NamesTheUnitOnce", () => assert.equal(plain(range(0.398, 0.431, "A")), "398 to 431 mA"));

test("percent_TooSmallToWrite_SaysSo", () => {
  assert.equal(plain(percent(0.0004)), "under 0.1 %");
  assert.equal(plain(percent(0)), "0.0 %");
  assert.equal(plain(percent(0.256)), "26 %");
});

test("clock_OverADay_NamesTheDays", () => {
  assert.equal(plain(clock(11225)), "3:07:05");
  assert.equal(plain(clock(90061)), "1 d 1:01:01");
  assert.equal(clock(-4), "0:00:00");
});

test("span_InWords", () => {
  assert.equal(plain(span(0.25)), "250 ms");
  assert.equal(plain(span(42)), "42 s");
  assert.equal(plain(span(11225)), "3 h 7 min");
  assert.equal(plain(span(7200)), "2 h");
});

test("count_Millions_AreGrouped", () => assert.equal(plain(count(2592000)), "2 592 000"));
