// How a filament looks at a temperature and a share of its rated light, both worked out by the host.

// Fit of the CIE 1931 colour matching functions: C. Wyman, P.-P. Sloan, P. Shirley, "Simple Analytic Approximations
// to the CIE XYZ Color Matching Functions", Journal of Computer Graphics Techniques 2 (2), 2013: multi-lobe form.
const lobe = (x, mean, below, above) => Math.exp(-0.5 * ((x - mean) * (x < mean ? below : above)) ** 2);
const xBar = (x) => 0.362 * lobe(x, 442, 0.0624, 0.0374) + 1.056 * lobe(x, 599.8, 0.0264, 0.0323) - 0.065 * lobe(x, 501.1, 0.049, 0.0382);
const yBar = (x) => 0.821 * lobe(x, 568.8, 0.0213, 0.0247) + 0.286 * lobe(x, 530.9, 0.0613, 0.0322);
const zBar = (x) => 1.217 * lobe(x, 437, 0.0845, 0.0278) + 0.681 * lobe(x, 459, 0.0385, 0.0725);

/** Second radiation constant h c / k in nm K (CODATA). */
const C2 = 1.438776877e7;

/** A filament below this cannot be seen at all (Draper's point). */
export const FIRST_GLOW_KELVIN = 798;

/** CIE x, y of a full radiator. Tungsten's own colour is within 60 K of it, which no screen shows. */
export function chromaticity(kelvin) {
  let X = 0, Y = 0, Z = 0;
  for (let nanometres = 380; nanometres <= 780; nanometres += 5) {
    const power = nanometres ** -5 / Math.expm1(C2 / (nanometres * kelvin));
    X += power * xBar(nanometres);
    Y += power * yBar(nanometres);
    Z += power * zBar(nanometres);
  }

  return { x: X / (X + Y + Z), y: Y / (X + Y + Z) };
}

const encode = (linear) => Math.round(255 * (linear <= 0.0031308 ? 12.92 * linear : 1.055 * linear ** (1 / 2.4) - 0.055));

const colours = new Map();

/** The colour of a filament as `rgb(…)`, at full brightness; to the nearest 20 K, so that it can be remembered. */
export function filamentColour(kelvin) {
  const rounded = Math.round(Math.min(Math.max(kelvin, FIRST_GLOW_KELVIN), 3600) / 20) * 20;
  let colour = colours.get(rounded);
  if (colour === undefined) {
    const { x, y } = chromaticity(rounded);
    const [X, Y, Z] = [x / y, 1, (1 - x - y) / y];
    // XYZ to linear sRGB (IEC 61966-2-1); what lies outside is cut, then the largest is made 1.
    const linear = [
      3.2406 * X - 1.5372 * Y - 0.4986 * Z,
      -0.9689 * X + 1.8758 * Y + 0.0415 * Z,
      0.0557 * X - 0.204 * Y + 1.057 * Z,
    ].map((part) => Math.max(part, 0));
    const most = Math.max(...linear);
    colour = `rgb(${linear.map((part) => encode(part / most)).join(" ")})`;
    colours.set(rounded, colour);
  }

  return colour;
}

/**
 * How bright to draw a lamp, 0 (cannot be seen) to 1 (rated light). The eye follows about the cube root of light
 * (CIE lightness), and a dim lamp in a bright shop must still be told from a dark one.
 */
export function brightness(kelvin, glow) {
  if (!(kelvin >= FIRST_GLOW_KELVIN)) {
    return 0;
  }

  const light = Math.min(Math.cbrt(Math.max(glow ?? 0, 0)), 1.15);
  return Math.max(light, 0.06);
}

/**
 * The colour as the eye takes it: it is used to the lamp's own colour, and near rated light it sees hardly more than white,
 * so a lit lamp is told from a dim one by its whiteness too.
 */
export function seenColour(kelvin, glow) {
  const light = Math.min(brightness(kelvin, glow), 1);
  const white = 0.78 * light ** 2;
  return filamentColour(kelvin).replace(/\d+/g, (part) => Math.round(Number(part) + (255 - part) * white));
}

/** The same in a word, because colour alone tells nobody who does not see it. */
export function glowWord(kelvin, glow) {
  if (!Number.isFinite(kelvin)) {
    return "not known";
  }

  if (kelvin < FIRST_GLOW_KELVIN) {
    return "dark";
  }

  if (glow < 0.002) {
    return "red glow";
  }

  if (glow < 0.05) {
    return "dim";
  }

  if (glow < 0.5) {
    return "lit";
  }

  return glow < 1.1 ? "full" : "over rating";
}
