// One run whole, or two over one another: from all of it down to one second.

import { h, problemBox, text } from "../pieces/dom.js";
import { badge } from "../pieces/shapes.js";
import { Plot, reading } from "../pieces/plot.js";
import { Windows } from "../pieces/windows.js";
import { get, runPath } from "../live/api.js";
import { clock, count, isNumber, span } from "../model/numbers.js";
import { around, clamp, keyed, pan, zoom } from "../model/zoom.js";
import { gapWord, signatureWord, wallTime } from "../model/words.js";

export function runView({ run, also }) {
  const runs = also ? [run, also] : [run];
  const head = h("div", { class: "run-head" }, h("h1", {}, also ? "Two runs compared" : `Run ${run}`));
  const plot = new Plot({
    label: "Trace. Arrow keys move, plus and minus zoom, Home shows the whole run.",
    height: matchMedia("(max-width: 640px)").matches ? 260 : 380,
    series: runs,
    describe: (seconds) => plot.say(said(seconds)),
  });
  plot.node.classList.add("zooms");
  const shown = h("span", { role: "status" });
  const key = (words, label, deed) => h("button", { class: "small", "aria-label": label, onclick: deed }, words);
  const middle = () => (plot.window.from + plot.window.to) / 2;
  const keys = h("div", { class: "zoom-keys" },
    key("−", "Zoom out", () => go(zoom(plot.window, 2, middle(), extent))), key("+", "Zoom in", () => go(zoom(plot.window, 0.5, middle(), extent))),
    key("‹", "Earlier", () => go(pan(plot.window, -0.5, extent))), key("›", "Later", () => go(pan(plot.window, 0.5, extent))),
    [[1, "1 s"], [60, "1 min"], [3600, "1 h"], [43200, "12 h"]].map(([seconds, words]) => key(words, `Show ${words}`, () => go(around(middle(), seconds, extent)))),
    key("whole run", "Show the whole run", () => go({ from: 0, to: extent.end })), shown);
  const legend = also ? h("p", { class: "legend" }, h("span", {}, h("i", {}), runs[0]), h("span", {}, h("i", { class: "other" }), runs[1])) : null;
  const lower = h("div", { class: "run-lower" });
  const node = h("div", { class: "stack" }, head, h("section", { class: "sheet stack", "aria-label": "Trace" }, legend, plot.node, keys), lower);
  const windows = new Windows(runs, (columns, amps) => plot.show(columns, plot.window, amps));
  let extent = { start: 0, end: 1 };
  let records = [];

  const said = (seconds) => windows.under(seconds, reading);

  function go(window) {
    plot.look(window);
    text(shown, `${clock(window.from)} to ${clock(window.to)}, ${span(window.to - window.from)}`);
    windows.want(window, extent, plot.width - 60);
  }

  async function load() {
    // The trace of the whole run is asked for together with the rest, not after it.
    const [all] = await Promise.all([Promise.all(runs.map((id) => get(runPath(id)))), windows.first(plot.width - 60)]);
    records = all;
    extent = { start: 0, end: Math.max(...records.map((record) => record.lengthSeconds), 1) };
    const band = also ? null : records[0].prediction?.band;
    plot.bands = isNumber(band?.lowAmps) ? [{ low: band.lowAmps, high: band.highAmps }] : [];
    plot.marks = records.flatMap((record, index) => record.findings.map((finding) => ({ seconds: finding.onsetSeconds, severity: finding.severity, label: also ? `${index + 1}: ${finding.signature}` : finding.signature })));
    plot.gaps = also ? [] : records[0].gaps;
    await plot.ready;
    go({ from: 0, to: extent.end });
    windows.show();
    head.append(...records.map((record) => summary(record, also)));
    lower.replaceChildren(...records.flatMap((record) => [findings(record, (finding) => {
      go(around(finding.onsetSeconds, Math.max(30, 4 * (finding.raisedSeconds - finding.onsetSeconds)), extent));
      plot.node.focus();
    }), downloads(record)]));
  }

  plot.node.addEventListener("keydown", (event) => {
    const window = event.ctrlKey || event.metaKey || event.altKey ? null : keyed(event.key, plot.window, extent);
    if (window) {
      event.preventDefault();
      go(window);
    }
  });
  gestures(plot, () => extent, go);
  load().catch((error) => head.append(problemBox(error)));
  return { node, title: also ? "Two runs" : `Run ${run}`, follows: null, update() {}, close: () => plot.close(), standsFor: () => null };
}

// The wheel zooms around the pointer, a drag moves, two fingers do both.
function gestures(plot, extent, go) {
  const area = plot.canvas;
  const fingers = new Map();
  const at = (clientX) => {
    const box = (area.querySelector(".u-over") ?? area).getBoundingClientRect();
    return plot.window.from + ((clientX - box.left) / box.width) * (plot.window.to - plot.window.from);
  };
  area.addEventListener("wheel", (event) => {
    event.preventDefault();
    const factor = Math.exp(Math.sign(event.deltaY) * Math.min(Math.abs(event.deltaY), 120) * 0.0026);
    go(Math.abs(event.deltaX) > Math.abs(event.deltaY) ? pan(plot.window, event.deltaX / 1000, extent()) : zoom(plot.window, factor, at(event.clientX), extent()));
  }, { passive: false });
  area.addEventListener("pointerdown", (event) => {
    if (event.target.closest(".u-over")) {
      area.setPointerCapture(event.pointerId);
      fingers.set(event.pointerId, event.clientX);
    }
  });
  area.addEventListener("pointermove", (event) => {
    if (!fingers.has(event.pointerId)) {
      return;
    }

    const before = [...fingers.values()].map(at);
    const wide = Math.abs(before[0] - (before[1] ?? before[0]));
    fingers.set(event.pointerId, event.clientX);
    const after = [...fingers.values()].map(at);
    if (after.length === 1) {
      const moved = before[0] - after[0];
      go(clamp({ from: plot.window.from + moved, to: plot.window.to + moved }, extent()));
    } else if (wide > 0) {
      go(zoom(plot.window, wide / Math.max(Math.abs(after[0] - after[1]), 1e-9), (after[0] + after[1]) / 2, extent()));
    }
  });
  for (const type of ["pointerup", "pointercancel"]) {
    area.addEventListener(type, (event) => fingers.delete(event.pointerId));
  }
}

function summary(record, also) {
  return h("div", {}, h("p", {}, record.verdict ? badge(record.verdict) : badge("watching", "goes on"), " ",
    `${also ? record.run + ": " : ""}${record.bench}, ${record.unit} behind ${record.bank} at ${record.mains}. Begun ${wallTime(record.startedUtc)}, ${span(record.lengthSeconds)} of ${span(record.plannedHours * 3600)}, ${count(record.readings)} readings.`),
    h("ul", { class: "plain" }, record.reasons.map((reason) => h("li", {}, reason))));
}

function findings(record, look) {
  const notes = record.notes.map((note) => h("li", {}, h("span", { class: "quiet" }, wallTime(note.utc), note.author ? `, ${note.author}: ` : ": "), note.text));
  const gaps = record.gaps.map((gap) => h("li", {}, `${clock(gap.fromSeconds)} to ${clock(gap.toSeconds)}: ${gapWord(gap.reason)}`));
  return h("section", { class: "sheet stack" }, h("h2", {}, `Findings of ${record.run}`),
    record.findings.length === 0 ? h("p", { class: "quiet" }, "None.") : h("ul", { class: "finding-list" }, record.findings.map((finding) => h("li", {},
      h("button", { class: "small", onclick: () => look(finding) }, `Show ${clock(finding.onsetSeconds)}`), badge(finding.severity, signatureWord(finding.signature)), h("p", {}, finding.explanation)))),
    gaps.length ? [h("h3", {}, "Gaps"), h("ul", { class: "plain" }, gaps)] : null,
    notes.length ? [h("h3", {}, "Notes"), h("ul", { class: "plain" }, notes)] : null);
}

function downloads(record) {
  const link = (rest, words) => h("a", { class: "button", href: runPath(record.run, rest), download: true }, words);
  return h("section", { class: "sheet stack" }, h("h2", {}, `Take away ${record.run}`),
    h("div", { class: "row" }, link("/export?format=csv", "CSV"), link("/export?format=parquet", "Parquet"), link("/report?format=pdf", "Report, PDF"), link("/report?format=html", "Report, HTML")),
    record.attachments.length ? h("ul", { class: "plain" }, record.attachments.map((item) => h("li", {}, h("a", { href: runPath(record.run, `/attachments/${encodeURIComponent(item.name)}`), download: item.name }, item.name)))) : null);
}
