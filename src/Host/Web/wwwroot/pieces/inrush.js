// The switch-on, kept in view for the whole run: the first readings beside what the meter was predicted to show.

import { h, s, text } from "./dom.js";
import { isNumber, span, withUnit } from "../model/numbers.js";

const WIDTH = 220;
const HEIGHT = 120;
const SHOWN_SECONDS = 30;

export class Inrush {
  #count = -1;

  constructor() {
    this.path = s("path", { class: "line" });
    this.points = s("g", { class: "points" });
    this.predicted = s("path", { class: "predicted" });
    this.caption = h("p", {});
    this.node = h("figure", { class: "inrush" },
      h("figcaption", {}, h("h3", {}, "Switch-on")),
      s("svg", { viewBox: `0 0 ${WIDTH} ${HEIGHT}`, "aria-hidden": "true" }, s("path", { class: "axis", d: `M2 2V${HEIGHT - 2}H${WIDTH - 2}` }), this.predicted, this.path, this.points),
      this.caption);
  }

  update(trace, prediction) {
    const shown = (trace?.first ?? []).filter(([seconds, amps]) => seconds <= SHOWN_SECONDS && isNumber(amps));
    if (shown.length === this.#count) {
      return;
    }

    this.#count = shown.length;
    const first = prediction?.inrush?.firstReadingAmps;
    const most = Math.max(...shown.map(([, amps]) => amps), first ?? 0, 1e-6) * 1.08;
    const end = Math.max(2, shown.at(-1)?.[0] ?? 2);
    const x = (seconds) => 4 + (seconds / end) * (WIDTH - 8);
    const y = (amps) => HEIGHT - 4 - (amps / most) * (HEIGHT - 8);
    this.path.setAttribute("d", shown.map(([seconds, amps], index) => `${index ? "L" : "M"}${x(seconds).toFixed(1)} ${y(amps).toFixed(1)}`).join(""));
    this.points.replaceChildren(...shown.slice(0, 12).map(([seconds, amps]) => s("circle", { cx: x(seconds), cy: y(amps), r: 2.4 })));
    this.predicted.setAttribute("d", isNumber(first) ? `M4 ${y(first)}H${WIDTH - 4}` : "");
    const largest = shown.length ? Math.max(...shown.map(([, amps]) => amps)) : null;
    text(this.caption, [
      largest === null ? "no reading yet" : `largest reading ${withUnit(largest, "A")} in the first ${span(end)}`,
      isNumber(first) ? `predicted ${withUnit(first, "A")}` : null,
      isNumber(prediction?.inrush?.peakAmps) ? `true peak ${withUnit(prediction.inrush.peakAmps, "A")}, which no meter shows` : null,
    ].filter(Boolean).join("; ") + ".");
  }
}
