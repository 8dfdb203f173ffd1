// Mains, bank and unit in volts, watts and ohms, each with its interval.

import { h, text } from "./dom.js";
import { isNumber, withInterval } from "../model/numbers.js";

const ROWS = [
  { of: "mains", title: "Mains", values: [["volts", "V"]] },
  { of: "bank", title: "Bank", values: [["volts", "V"]] },
  { of: "unit", title: "Unit", values: [["volts", "V"], ["watts", "W"], ["ohms", "Ω"]] },
];

const upper = (name) => name[0].toUpperCase() + name.slice(1);

export class Readouts {
  #cells = [];

  constructor() {
    this.note = h("p", { class: "quiet" });
    const boxes = ROWS.map(({ of, title, values }) => h("div", { class: `readout of-${of}` },
      h("h3", {}, title),
      values.map(([name, unit]) => {
        const value = h("p", { class: "value" });
        const interval = h("p", { class: "interval" });
        this.#cells.push({ of, name, unit, value, interval });
        return h("div", {}, value, interval);
      })));
    this.node = h("section", { class: "readouts", "aria-label": "Volts, watts and ohms" }, boxes, this.note);
  }

  update(now) {
    for (const { of, name, unit, value, interval } of this.#cells) {
      const from = now?.[of];
      const said = withInterval(from?.[name], from?.["low" + upper(name)], from?.["high" + upper(name)], unit);
      text(value, said.text);
      text(interval, said.interval || (of === "mains" && isNumber(from?.volts) && !from.measured ? "as configured, not measured" : ""));
    }

    text(this.note, now?.note ?? "");
    this.note.hidden = !now?.note;
  }
}
