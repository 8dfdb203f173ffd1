// Alerts that somebody has to know of, with what a person can do about each.

import { act, h, text } from "./dom.js";
import { badge } from "./shapes.js";
import { clock } from "../model/numbers.js";
import { causeWord, stateWord } from "../model/words.js";
import { benchPath, post } from "../live/api.js";

const SHELVES = [[15, "15 min"], [60, "1 h"], [240, "4 h"]];
const RANK = { critical: 0, warning: 1, notice: 2 };
const needsNoMore = (alert) => alert.state === "normal";
const canBeAcknowledged = (alert) => !["acknowledged", "normal"].includes(alert.state);

export class Alerts {
  #drawn = "";

  constructor() {
    this.list = h("ul", { class: "alerts" });
    this.over = h("ul", { class: "alerts over" });
    this.overTitle = h("summary", {}, "");
    this.overBox = h("details", {}, this.overTitle, this.over);
    this.none = h("p", { class: "quiet" }, "No alert is open.");
    this.problem = h("div", {});
    this.node = h("section", { class: "sheet alert-box", "aria-labelledby": "alerts-title" },
      h("h2", { id: "alerts-title" }, "Alerts"), this.problem, this.none, this.list, this.overBox);
  }

  update(document) {
    // Drawn anew only when something changed: a button under a finger must not be swapped for another.
    const key = JSON.stringify([document.run, document.alerts]);
    if (key === this.#drawn || this.node.contains(globalThis.document.activeElement?.closest("form") ?? null)) {
      return;
    }

    this.#drawn = key;
    const alerts = [...(document.alerts ?? [])].sort((a, b) => RANK[a.severity] - RANK[b.severity] || b.raisedSeconds - a.raisedSeconds);
    const open = alerts.filter((alert) => !needsNoMore(alert));
    const over = alerts.filter(needsNoMore);
    this.list.replaceChildren(...open.map((alert) => this.#alert(document.bench, alert)));
    this.over.replaceChildren(...over.map((alert) => this.#alert(document.bench, alert)));
    this.none.hidden = open.length > 0;
    this.overBox.hidden = over.length === 0;
    text(this.overTitle, `${over.length} over`);
  }

  #alert(bench, alert) {
    const place = h("div", {});
    const path = (rest) => benchPath(bench, `/alerts/${encodeURIComponent(alert.number)}/${rest}`);
    const acknowledge = h("button", { class: "main", onclick: () => act(acknowledge, place, () => post(path("acknowledge"))) }, "Acknowledge");
    const note = h("input", { name: "note", maxlength: "500", "aria-label": "Note", placeholder: "What did you find?" });
    const keep = h("button", { class: "small" }, "Keep note");
    const form = h("form", {
      class: "row note-form",
      onsubmit: (event) => {
        event.preventDefault();
        note.blur();
        act(keep, place, async () => {
          await post(benchPath(bench, "/notes"), { text: `${causeWord(alert.cause)}: ${note.value}` });
          note.value = "";
          place.replaceChildren(h("p", { role: "status" }, "Kept with the run."));
        });
      },
    }, note, keep);
    const reset = h("button", { onclick: () => act(reset, place, () => post(path("reset"))) }, "Reset");
    const unshelve = h("button", { onclick: () => act(unshelve, place, () => post(path("unshelve"))) }, "Back from the shelf");
    const shelve = SHELVES.map(([minutes, words]) => {
      const button = h("button", { class: "small", onclick: () => act(button, place, () => post(path("shelve"), { minutes })) }, words);
      return button;
    });
    return h("li", { class: `alert a-${alert.severity}` },
      h("p", { class: "alert-head" }, badge(alert.severity, causeWord(alert.cause)), " ",
        h("span", { class: "quiet" }, `${alert.severity}, since ${clock(alert.raisedSeconds)}, ${stateWord(alert.state)}`)),
      h("p", {}, alert.text),
      h("div", { class: "row alert-deeds" },
        alert.state === "shelved" ? unshelve : alert.state === "latched-acknowledged" ? reset : canBeAcknowledged(alert) ? acknowledge : null,
        form,
        needsNoMore(alert) || alert.state === "shelved" ? null : h("span", { class: "row shelve" }, h("span", { class: "quiet" }, "Shelve"), shelve)),
      place);
  }
}
