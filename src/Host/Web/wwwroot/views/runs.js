// Looking back: the runs there are, narrowed down.

import { act, h, problemBox, text } from "../pieces/dom.js";
import { badge } from "../pieces/shapes.js";
import { get, query } from "../live/api.js";
import { count, span } from "../model/numbers.js";
import { wallTime } from "../model/words.js";

export function runsView() {
  const bench = h("input", { id: "runs-bench", autocomplete: "off" });
  const unit = h("input", { id: "runs-unit", autocomplete: "off" });
  const verdict = h("select", { id: "runs-verdict" }, [["", "any"], ["passed", "passed"], ["failed", "failed"], ["incomplete", "incomplete"]].map(([value, words]) => h("option", { value }, words)));
  const from = h("input", { id: "runs-from", type: "date" });
  const to = h("input", { id: "runs-to", type: "date" });
  const field = (input, words) => h("div", { class: "field" }, h("label", { for: input.id }, words), input);
  const button = h("button", { class: "main" }, "Show");
  const place = h("div", {});
  const found = h("p", { class: "quiet", role: "status" });
  const body = h("tbody", {});
  const compare = h("button", { disabled: true, onclick: () => (location.hash = `#/run/${chosen.map(encodeURIComponent).join("/")}`) }, "Compare the two chosen");
  const chosen = [];
  const form = h("form", { class: "sheet runs-form", onsubmit: (event) => {
    event.preventDefault();
    act(button, place, ask);
  } }, field(bench, "Bench"), field(unit, "Unit or label"), field(verdict, "Verdict"), field(from, "From"), field(to, "Until"), h("div", {}, button));
  const node = h("div", { class: "stack" }, h("h1", {}, "Look back"), form, place,
    h("section", { class: "sheet stack", "aria-label": "Runs" },
      h("div", { class: "row" }, found, compare),
      h("div", { class: "scroll", tabindex: "0", role: "region", "aria-label": "List of runs" }, h("table", { class: "runs" },
        h("thead", {}, h("tr", {}, ["", "Run", "Bench", "Unit", "Bank", "Begun", "Length", "Readings", "Findings", "Verdict"].map((words) => h("th", { scope: "col" }, words || h("span", { class: "sr" }, "Compare"))))), body))));

  async function ask() {
    const midnight = (value, days) => (value ? new Date(new Date(`${value}T00:00`).getTime() + days * 86400000).toISOString() : null);
    const runs = await get("/api/runs" + query({ bench: bench.value, unit: unit.value, verdict: verdict.value, fromUtc: midnight(from.value, 0), toUtc: midnight(to.value, 1), most: 500 }));
    text(found, runs.length === 0 ? "No run is like that." : `${count(runs.length)} ${runs.length === 1 ? "run" : "runs"}${runs.length === 500 ? ", the latest; narrow it down to see others" : ""}`);
    chosen.length = 0;
    compare.disabled = true;
    body.replaceChildren(...runs.map(row));
  }

  function row(run) {
    const box = h("input", { type: "checkbox", "aria-label": `Compare run ${run.run}`, onchange: () => {
      box.checked ? chosen.push(run.run) : chosen.splice(chosen.indexOf(run.run), 1);
      compare.disabled = chosen.length !== 2;
    } });
    return h("tr", {},
      h("td", {}, box),
      h("td", {}, h("a", { href: `#/run/${encodeURIComponent(run.run)}` }, run.run)),
      h("td", {}, run.bench), h("td", {}, run.unit, run.unitLabel ? ` (${run.unitLabel})` : ""), h("td", {}, run.bank),
      h("td", {}, wallTime(run.startedUtc)), h("td", {}, span(run.lengthSeconds)),
      h("td", { class: "number" }, count(run.readings)), h("td", { class: "number" }, count(run.findings)),
      h("td", {}, run.verdict ? badge(run.verdict) : badge("watching", "goes on")));
  }

  ask().catch((error) => place.replaceChildren(problemBox(error)));
  return { node, title: "Look back", follows: null, update() {}, close() {}, standsFor: () => null };
}
