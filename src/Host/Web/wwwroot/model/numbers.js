// Numbers as a technician reads them: unit beside the number, as many digits as the interval allows, never more.

const NO_BREAK = "\u00a0";
const NOTHING = "–";

const SCALES = {
  A: [[1, "A"], [1e-3, "mA"]],
  V: [[1, "V"]],
  W: [[1, "W"]],
  Ω: [[1e6, "MΩ"], [1e3, "kΩ"], [1, "Ω"]],
  K: [[1, "K"]],
  s: [[1, "s"], [1e-3, "ms"]],
};

/** Whether something can be written as a number at all. */
export const isNumber = (value) => typeof value === "number" && Number.isFinite(value);

function scaleFor(value, unit) {
  const scales = SCALES[unit] ?? [[1, unit]];
  const size = Math.abs(value);
  // 0.9995 A would be written as 1000 mA: leave for the larger unit a little before it is reached.
  return scales.find(([factor]) => size >= factor * 0.9995) ?? scales[scales.length - 1];
}

function fixed(value, decimals) {
  const text = value.toFixed(Math.min(Math.max(decimals, 0), 6));
  return text.startsWith("-") ? "\u2212" + text.slice(1) : text;
}

/** Decimals that show `significant` digits of `size`. */
function decimalsFor(size, significant) {
  return size > 0 ? significant - 1 - Math.floor(Math.log10(size)) : significant - 1;
}

/** One number in parts, for a display that sets the unit apart. */
export function parts(value, unit, significant = 3) {
  if (!isNumber(value)) {
    return { number: NOTHING, unit: (SCALES[unit] ?? [[1, unit]])[0][1] };
  }

  const [factor, name] = scaleFor(value, unit);
  const scaled = value / factor;
  const rounded = Math.abs(Number(scaled.toPrecision(significant)));
  const decimals = value === 0 ? 0 : Math.max(0, decimalsFor(rounded, significant));
  return { number: fixed(scaled, decimals), unit: name };
}

/** One number with its unit: `412 mA`. */
export function withUnit(value, unit, significant = 3) {
  const { number, unit: name } = parts(value, unit, significant);
  return number === NOTHING ? NOTHING : number + NO_BREAK + name;
}

/** Decimals for a value known between low and high: half the width keeps two digits up to 354, one above (the rule of the Particle Data Group). */
function decimalsOfInterval(low, high) {
  const half = (high - low) / 2;
  const leading = half / 10 ** (Math.floor(Math.log10(half)) - 2);
  return Math.max(0, decimalsFor(half, leading < 354.5 ? 2 : 1));
}

/**
 * A value with its interval: `83.1 V` and `79.6 to 86.5 V`. Where only the upper end is known the number itself
 * says so: `< 18 Ω`.
 */
export function withInterval(value, low, high, unit) {
  if (!isNumber(value) && isNumber(low) && isNumber(high)) {
    return { text: NOTHING, interval: `between ${range(low, high, unit).replace(" to ", " and ")}` };
  }

  if (!isNumber(value) && isNumber(high)) {
    return { text: `<${NO_BREAK}${withUnit(high, unit, 2)}`, interval: "below this; more cannot be said" };
  }

  if (!isNumber(value)) {
    return { text: NOTHING, interval: "" };
  }

  if (!isNumber(low) || !isNumber(high) || high <= low) {
    return { text: withUnit(value, unit), interval: "" };
  }

  const [factor, name] = scaleFor(Math.max(Math.abs(value), Math.abs(high) / 10), unit);
  const decimals = decimalsOfInterval(low / factor, high / factor);
  const say = (number) => fixed(number / factor, decimals);
  return {
    text: say(value) + NO_BREAK + name,
    interval: `${say(low)} to ${say(high)}${NO_BREAK}${name}`,
  };
}

/** A range of one quantity: `398 to 431 mA`. */
export function range(low, high, unit) {
  if (!isNumber(low) || !isNumber(high)) {
    return NOTHING;
  }

  const [factor, name] = scaleFor(high, unit);
  const decimals = Math.max(0, decimalsFor(Math.abs(high / factor), 3));
  return `${fixed(low / factor, decimals)} to ${fixed(high / factor, decimals)}${NO_BREAK}${name}`;
}

/** A share 0..1 as percent; what is too small to write is said to be that. */
export function percent(share) {
  if (!isNumber(share)) {
    return NOTHING;
  }

  const value = share * 100;
  if (value !== 0 && Math.abs(value) < 0.1) {
    return "under" + NO_BREAK + "0.1" + NO_BREAK + "%";
  }

  return fixed(value, Math.abs(value) < 10 ? 1 : 0) + NO_BREAK + "%";
}

/** A length of time for a clock face: `3:07:05`, with days before it where there are any. */
export function clock(seconds) {
  if (!isNumber(seconds)) {
    return NOTHING;
  }

  const whole = Math.max(0, Math.floor(seconds));
  const two = (number) => String(number).padStart(2, "0");
  const days = Math.floor(whole / 86400);
  const text = `${Math.floor((whole % 86400) / 3600)}:${two(Math.floor((whole % 3600) / 60))}:${two(whole % 60)}`;
  return days > 0 ? `${days}${NO_BREAK}d ${text}` : text;
}

/** A length of time in words: `3 h 7 min`, `42 s`, `0.25 s`. */
export function span(seconds) {
  if (!isNumber(seconds)) {
    return NOTHING;
  }

  if (seconds < 1) {
    return withUnit(seconds, "s", 2);
  }

  if (seconds < 60) {
    return fixed(seconds, seconds < 10 && seconds % 1 !== 0 ? 1 : 0) + NO_BREAK + "s";
  }

  const minutes = Math.round(seconds / 60);
  if (minutes < 60) {
    return `${minutes}${NO_BREAK}min`;
  }

  const hours = Math.floor(minutes / 60);
  const rest = minutes % 60;
  return rest === 0 ? `${hours}${NO_BREAK}h` : `${hours}${NO_BREAK}h ${rest}${NO_BREAK}min`;
}

/** A count with thin grouping: `2 592 000`. */
export function count(value) {
  return isNumber(value) ? Math.round(value).toString().replace(/\B(?=(\d{3})+$)/g, NO_BREAK) : NOTHING;
}
