// Which stretch of time a trace shows. All in seconds; nothing here knows a screen.

/** The shortest stretch anybody looks at. */
export const SHORTEST_SECONDS = 1;

/** Keeps a window within the run, at least SHORTEST_SECONDS long, without changing its length where it need not. */
export function clamp({ from, to }, { start, end }) {
  const whole = Math.max(end - start, SHORTEST_SECONDS);
  const length = Math.min(Math.max(to - from, SHORTEST_SECONDS), whole);
  const middle = (from + to) / 2;
  const first = Math.min(Math.max(middle - length / 2, start), start + whole - length);
  return { from: first, to: first + length };
}

/** Makes the window `factor` times as long; the instant `at` stays where it is on the screen. */
export function zoom(window, factor, at, extent) {
  const length = window.to - window.from;
  const whole = Math.max(extent.end - extent.start, SHORTEST_SECONDS);
  const wanted = Math.min(Math.max(length * factor, SHORTEST_SECONDS), whole);
  const share = length > 0 ? (at - window.from) / length : 0.5;
  return clamp({ from: at - share * wanted, to: at + (1 - share) * wanted }, extent);
}

/** Moves the window by a share of its length. */
export function pan(window, share, extent) {
  const step = (window.to - window.from) * share;
  return clamp({ from: window.from + step, to: window.to + step }, extent);
}

/** A window around one instant (a finding), as long as asked. */
export function around(seconds, length, extent) {
  return clamp({ from: seconds - length / 2, to: seconds + length / 2 }, extent);
}

/**
 * What to ask the host for: a window wider than the one shown, on steps of a power of two, so that panning and
 * zooming back find it in the store of answers.
 */
export function request(window, extent, pixels) {
  const length = Math.max(window.to - window.from, SHORTEST_SECONDS);
  const grain = 2 ** Math.ceil(Math.log2(length)) / 2;
  const from = Math.max(extent.start, Math.floor(window.from / grain) * grain - grain);
  const to = Math.min(extent.end, Math.ceil(window.to / grain) * grain + grain);
  const points = Math.min(4000, Math.max(200, Math.ceil((pixels * (to - from)) / length)));
  return { from, to, points: 2 ** Math.ceil(Math.log2(points)) };
}

/** Whether an answer is fine enough for the window on so many pixels: a bucket may be two of them, because the host rounds long ones up. */
export function fineEnough(answer, window, pixels) {
  return answer.from <= window.from && answer.to >= window.to && answer.bucketSeconds <= (2 * (window.to - window.from)) / pixels;
}

/** What one key does to a trace; null where the key is not ours. */
export function keyed(key, window, extent) {
  const middle = (window.from + window.to) / 2;
  switch (key) {
    case "ArrowLeft": return pan(window, -0.2, extent);
    case "ArrowRight": return pan(window, 0.2, extent);
    case "+": case "=": return zoom(window, 0.5, middle, extent);
    case "-": case "_": return zoom(window, 2, middle, extent);
    case "Home": return { from: extent.start, to: Math.max(extent.end, extent.start + SHORTEST_SECONDS) };
    case "End": return clamp({ from: extent.end - (window.to - window.from), to: extent.end }, extent);
    default: return null;
  }
}
