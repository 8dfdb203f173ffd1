// One shape for each standing, told apart by outline alone: from across the room, in print, and by those who see no red.

import { h, s } from "./dom.js";
import { standingWord } from "../model/order.js";

const stroke = { fill: "none", stroke: "currentColor", "stroke-width": 2.6, "stroke-linecap": "round", "stroke-linejoin": "round" };
const ring = () => s("circle", { cx: 12, cy: 12, r: 9.6, ...stroke });

const DRAWINGS = {
  critical: () => [
    s("path", { d: "M7.6 1.5h8.8l6.1 6.1v8.8l-6.1 6.1H7.6l-6.1-6.1V7.6z", fill: "currentColor" }),
    s("path", { d: "M12 6v7.4M12 17.4v.4", ...stroke, stroke: "var(--shape-inside, #fff)" }),
  ],
  warning: () => [
    s("path", { d: "M12 1.8 23.2 21.6H.8z", fill: "currentColor" }),
    s("path", { d: "M12 9v5.4M12 17.9v.4", ...stroke, stroke: "var(--shape-inside, #fff)" }),
  ],
  blind: () => [ring(), s("path", { d: "M5.4 18.6 18.6 5.4", ...stroke })],
  notice: () => [s("rect", { x: 2.4, y: 2.4, width: 19.2, height: 19.2, ...stroke }), s("path", { d: "M12 11v6M12 7v.3", ...stroke })],
  settling: () => [ring(), s("path", { d: "M7.5 12h.01M12 12h.01M16.5 12h.01", ...stroke, "stroke-width": 3.4 })],
  watching: () => [ring(), s("path", { d: "M6.6 12h10.8", ...stroke })],
  waiting: () => [s("circle", { cx: 12, cy: 12, r: 9.6, ...stroke, "stroke-dasharray": "4 4.6" })],
  failed: () => [s("rect", { x: 2.4, y: 2.4, width: 19.2, height: 19.2, ...stroke }), s("path", { d: "M7.5 7.5l9 9M16.5 7.5l-9 9", ...stroke })],
  incomplete: () => [ring(), s("path", { d: "M12 2.4a9.6 9.6 0 0 1 0 19.2z", fill: "currentColor" })],
  passed: () => [ring(), s("path", { d: "M7 12.4l3.6 3.6L17.2 8.6", ...stroke })],
  idle: () => [s("circle", { cx: 12, cy: 12, r: 5, ...stroke })],
};

/** The drawing; hidden from screen readers, because its word always stands beside it. */
export function shape(standing) {
  return s("svg", { class: `shape s-${standing}`, viewBox: "0 0 24 24", "aria-hidden": "true" }, DRAWINGS[standing]());
}

/** Shape and word together. */
export function badge(standing, word = standingWord(standing)) {
  return h("span", { class: `badge s-${standing}` }, shape(standing), " ", word);
}
