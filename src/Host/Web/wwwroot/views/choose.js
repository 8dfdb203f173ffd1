// Choosing a bank: every useful combination of the lamps at hand, with what a short would look like beside health.

import { act, h } from "../pieces/dom.js";
import { lampRow } from "../pieces/lamp-row.js";
import { stepList } from "../pieces/bring-up.js";
import { cautions } from "../pieces/outlook.js";
import { get, query } from "../live/api.js";
import { isNumber, percent, withUnit } from "../model/numbers.js";

export function chooseView({ state }) {
  const first = [...state.benches.values()][0]?.document;
  const mains = h("input", { id: "choose-mains", value: first?.mains ?? "120 V 60 Hz", required: true });
  const unit = h("input", { id: "choose-unit", value: first?.unit ?? "rectifier 45 W 470 uF", required: true });
  const lamps = h("input", { id: "choose-lamps", placeholder: "25 W, 75 W, 75 W, 150 W" });
  const field = (input, words, hint) => h("div", { class: "field" }, h("label", { for: input.id }, words, hint ? h("small", {}, hint) : null), input);
  const place = h("div", {});
  const answer = h("div", { class: "stack", "aria-live": "polite" });
  const button = h("button", { class: "main" }, "Rank the banks");
  const form = h("form", { class: "sheet choose-form", onsubmit: (event) => {
    event.preventDefault();
    act(button, place, ask);
  } },
  field(mains, "Mains", "such as 230 V 50 Hz"), field(unit, "Unit", "such as switch-mode 60 W"),
  field(lamps, "Lamps at hand", "with commas between; empty for the usual ones"), h("div", {}, button), place);
  const node = h("div", { class: "stack" }, h("h1", {}, "Choose a bank"), form, answer);
  let asking = null;

  async function ask() {
    asking?.abort();
    asking = new AbortController();
    const found = await get("/api/choose" + query({ mains: mains.value, unit: unit.value, lamps: lamps.value }), asking.signal);
    answer.replaceChildren(table(found.choices, found.considered), bringUp(found.bringUp), ...found.notes.map((note) => h("p", { class: "quiet" }, note)), cautions());
  }

  act(button, place, ask);
  return { node, title: "Choose a bank", follows: null, update() {}, close: () => asking?.abort(), standsFor: () => null };
}

const VERDICTS = {
  fits: "Fits.",
  starves: "Starves the unit.",
  "hides-short": "Hides a short.",
  "lets-through": "Lets too much through.",
  "cannot-run": "Cannot run it.",
};

const lampsOrNone = (lamps) => (lamps?.length ? lampRow(lamps) : h("span", { class: "quiet" }, "–"));

function table(choices, considered) {
  return h("section", { class: "sheet", "aria-labelledby": "choices" },
    h("h2", { id: "choices" }, "Banks, best first"),
    h("p", { class: "quiet" }, `The best ${choices.length} of ${considered} that these lamps can make.`),
    h("ol", { class: "choices" }, choices.map((choice) => h("li", { class: choice.exists ? "" : "cannot" },
      h("p", { class: "choice-bank" }, choice.bank),
      h("p", { class: "choice-verdict" }, h("strong", {}, VERDICTS[choice.verdict] ?? choice.verdict), " ", choice.reason),
      h("div", { class: "choice-side" }, h("span", {}, "healthy"), lampsOrNone(choice.healthyLamps), h("strong", {}, withUnit(choice.lineAmps, "A"))),
      h("div", { class: "choice-side" }, h("span", {}, "shorted"), lampsOrNone(choice.shortedLamps), h("strong", {}, withUnit(choice.shortedAmps, "A"))),
      h("p", { class: "choice-more" },
        h("span", {}, "contrast ", h("strong", {}, isNumber(choice.contrast) ? choice.contrast.toFixed(1) : "–")),
        h("span", {}, "unit gets ", h("strong", {}, percent(choice.unitVoltsShare)), " of mains"))))));
}

const bringUp = (steps) => h("section", { class: "sheet", "aria-labelledby": "bring" },
  h("h2", { id: "bring" }, "Bring-up"),
  steps?.length ? stepList(steps) : h("p", { class: "quiet" }, "No bring-up for these lamps."));
