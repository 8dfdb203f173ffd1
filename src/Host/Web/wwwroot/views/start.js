// Starting a soak: choose, see what should happen and what a short would look like, read the cautions, then watch.

import { act, h, problemBox, text } from "../pieces/dom.js";
import { cautions, outlook } from "../pieces/outlook.js";
import { stepList } from "../pieces/bring-up.js";
import { benchPath, get, post, query } from "../live/api.js";
import { bankText, lampsOf } from "../model/circuit.js";

const UNITS = ["resistor 240 ohm", "lamp 100 W", "heater 800 W", "transformer 60 VA", "rectifier 45 W 470 uF", "switch-mode 60 W", "motor 200 W"];

export function startView({ state, name, go }) {
  const bench = h("select", { id: "start-bench" });
  const unit = h("input", { id: "start-unit", list: "unit-texts", autocomplete: "off", required: true });
  const label = h("input", { id: "start-label", maxlength: "100", autocomplete: "off" });
  const hours = h("input", { id: "start-hours", type: "number", min: "0.01", max: "1000", step: "any", required: true });
  const bank = h("input", { id: "start-bank", autocomplete: "off", required: true });
  const lamps = h("fieldset", { class: "lamps" });
  const stepwise = h("input", { type: "checkbox", id: "start-stepwise" });
  const off = h("input", { type: "checkbox", id: "start-off", required: true });
  const predicted = h("div", { class: "stack", "aria-live": "polite" }, h("p", { class: "quiet" }, "Choose a bench first."));
  const steps = h("div", {});
  const place = h("div", {});
  const busy = h("p", { class: "caution", hidden: true });
  const start = h("button", { class: "main" }, "Start watching");
  const field = (input, words, hint) => h("div", { class: "field" }, h("label", { for: input.id }, words, hint ? h("small", {}, hint) : null), input);
  const form = h("form", { class: "start", onsubmit: submit },
    h("section", { class: "sheet stack", "aria-labelledby": "start-choose" },
      h("h2", { id: "start-choose" }, "1. Choose"),
      field(bench, "Bench"), busy,
      field(unit, "Unit", "what it takes at full mains, such as rectifier 45 W 470 uF"),
      h("datalist", { id: "unit-texts" }, UNITS.map((value) => h("option", { value }))),
      field(label, "Label", "a job or serial number; may be empty"),
      lamps, field(bank, "Bank", "|| side by side, + one after the other"),
      field(hours, "Hours to soak")),
    h("section", { class: "sheet stack", "aria-labelledby": "start-see" }, h("h2", { id: "start-see" }, "2. See what should happen"), predicted),
    h("section", { class: "sheet stack", "aria-labelledby": "start-go" },
      h("h2", { id: "start-go" }, "3. Read this, then begin"), cautions(),
      h("label", { class: "row" }, stepwise, "Bring it up lamp by lamp"), steps,
      h("label", { class: "row" }, off, "The mains is off, and I have read this."),
      h("div", { class: "row" }, start), place));
  const node = h("div", { class: "stack" }, h("h1", {}, "Start a soak"), form);
  let shown = null;
  let asking = null;
  let timer = null;
  let plan = null;

  bench.addEventListener("change", () => take(bench.value));
  for (const input of [unit, bank]) {
    input.addEventListener("input", () => soon());
  }

  stepwise.addEventListener("change", drawSteps);

  function take(wanted) {
    const document = state.benches.get(wanted)?.document;
    if (!document) {
      return;
    }

    shown = wanted;
    bench.value = wanted;
    [unit.value, bank.value, hours.value] = [document.unit, document.bank, String((document.plannedSeconds ?? 43200) / 3600)];
    const all = document.bankTree ? lampsOf(document.bankTree) : [];
    lamps.replaceChildren(h("legend", {}, "Lamps switched in"), ...all.map((lamp) => h("label", { class: "row" },
      h("input", { type: "checkbox", checked: true, value: lamp.index, onchange: () => switched(document.bankTree) }), lamp.name)));
    lamps.hidden = all.length < 2;
    predict();
  }

  function switched(tree) {
    const out = new Set([...lamps.querySelectorAll("input")].filter((box) => !box.checked).map((box) => Number(box.value)));
    bank.value = bankText(tree, out) ?? "";
    predict();
  }

  function soon() {
    clearTimeout(timer);
    timer = setTimeout(predict, 350);
  }

  async function predict() {
    asking?.abort();
    asking = new AbortController();
    const document = state.benches.get(shown)?.document;
    try {
      plan = null;
      const parameters = { mains: document.mains, bank: bank.value, unit: unit.value, bench: shown };
      const prediction = await get("/api/predict" + query(parameters), asking.signal);
      predicted.replaceChildren(outlook(prediction));
      plan = await get("/api/bring-up" + query(parameters), asking.signal).catch(() => null);
      drawSteps();
    } catch (error) {
      if (error.name !== "AbortError") {
        predicted.replaceChildren(problemBox(error));
      }
    }
  }

  function drawSteps() {
    const several = (plan?.steps.length ?? 0) > 1;
    stepwise.disabled = !several;
    steps.replaceChildren(...(several ? (stepwise.checked ? [stepList(plan.steps)] : []) : [h("p", { class: "hint" }, "One step only: there is nothing to bring up lamp by lamp.")]));
  }

  async function submit(event) {
    event.preventDefault();
    await act(start, place, async () => {
      await post(benchPath(shown, "/soak"), {
        unit: unit.value,
        bank: bank.value,
        unitLabel: label.value || null,
        plannedHours: Number(hours.value),
        bringUp: stepwise.checked && !stepwise.disabled,
      });
      go(`#/bench/${encodeURIComponent(shown)}`);
    });
    update();
  }

  function update() {
    const names = [...state.benches.keys()];
    if (bench.options.length !== names.length) {
      bench.replaceChildren(...names.map((value) => h("option", { value }, value)));
    }

    if (shown === null && names.length > 0) {
      const free = names.find((value) => state.benches.get(value).document.canStart);
      take(names.includes(name) ? name : free ?? names[0]);
    }

    const document = state.benches.get(shown)?.document;
    const free = document?.canStart ?? false;
    start.disabled = !free;
    busy.hidden = !document || free;
    text(busy, document && !free ? `${shown} is soaking or waits for current: end that soak first.` : "");
  }

  return { node, title: "Start a soak", follows: null, update, close: () => asking?.abort(), standsFor: () => null };
}
