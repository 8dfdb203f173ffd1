import { test } from "node:test";
import assert from "node:assert/strict";
import { brightness, chromaticity, filamentColour, glowWord, seenColour } from "../../../../src/Host/Web/wwwroot/model/glow.js";

const numbers = (colour) => colour.match(/\d+/g).map(Number);

test("chromaticity_OfIlluminantA_IsThePublishedOne", () => {
  // CIE standard illuminant A: 2856 K, x = 0.44757, y = 0.40745 (CIE 15, ISO 11664-2). The fit is good to about 0.003.
  const { x, y } = chromaticity(2856);
  assert.ok(Math.abs(x - 0.44757) < 0.003, `x ${x}`);
  assert.ok(Math.abs(y - 0.40745) < 0.003, `y ${y}`);
});

test("filamentColour_HotterFilament_IsLessRed", () => {
  let before = [255, 0, 0];
  for (const kelvin of [900, 1500, 2000, 2400, 2800]) {
    const colour = numbers(filamentColour(kelvin));
    assert.equal(colour[0], 255);
    assert.ok(colour[1] >= before[1] && colour[2] >= before[2], `${kelvin} K: ${colour}`);
    before = colour;
  }
  assert.ok(before[1] > 150, "a lamp at its rating is nearly white");
});

test("brightness_BelowFirstGlow_IsNothing", () => {
  assert.equal(brightness(790, 0), 0);
  assert.equal(brightness(null, null), 0);
  assert.equal(brightness(NaN, 1), 0);
});

test("brightness_RisesWithGlow_AndAFaintGlowIsSeen", () => {
  assert.ok(brightness(900, 1e-9) > 0.05);
  assert.ok(brightness(1800, 0.02) < brightness(2200, 0.2));
  assert.ok(brightness(2200, 0.2) < brightness(2750, 1));
  assert.equal(brightness(2750, 1), 1);
  assert.ok(brightness(3400, 9) <= 1.15);
});

test("glowWord_NamesEveryStage", () => {
  assert.deepEqual(
    [[NaN, NaN], [400, 0], [1200, 0.00001], [1900, 0.01], [2400, 0.2], [2800, 1], [3000, 2]].map(([kelvin, glow]) => glowWord(kelvin, glow)),
    ["not known", "dark", "red glow", "dim", "lit", "full", "over rating"],
  );
});

test("seenColour_FullLight_IsNearlyWhite_DimLightKeepsItsColour", () => {
  const full = numbers(seenColour(2750, 1));
  assert.ok(full[2] > 200, `${full}`);
  assert.deepEqual(numbers(seenColour(1500, 0.0005))[0], 255);
  assert.ok(numbers(seenColour(1500, 0.0005))[2] < 60);
});
