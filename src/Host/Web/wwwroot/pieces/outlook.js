// What is predicted for a bank and a unit: healthy beside shorted, as drawn lamps and as numbers.

import { h } from "./dom.js";
import { CircuitPicture } from "./circuit-picture.js";
import { isNumber, percent, range, span, withUnit } from "../model/numbers.js";

const CAUTIONS = [
  "A lamp limiter does not isolate: every part behind it is live at mains potential, on or off standby.",
  "The lamps get hot: keep them clear of whatever burns.",
  "Fuse, RCD/GFCI and isolation transformer are your business. This page is never the protective device.",
  "Local codes and licensed practice come first.",
];

/** The cautions, where they matter: before mains is switched on. */
export const cautions = () => h("div", { class: "caution" }, h("h3", {}, "Before mains is switched on"), h("ul", { class: "plain" }, CAUTIONS.map((line) => h("li", {}, line))));

/** How well a short can be told from health by eye and by meter. */
export function contrastWord(contrast) {
  if (!isNumber(contrast)) {
    return "not known";
  }

  return contrast >= 3 ? "a short stands out" : contrast >= 1.6 ? "a short can be told" : "a short looks almost healthy";
}

const board = (title, prediction, lamps, words) => h("figure", { class: "outlook-board" },
  h("figcaption", {}, h("h3", {}, title), h("p", { class: "quiet" }, words)),
  h("div", { class: "board" }, (() => {
    const picture = new CircuitPicture(prediction.bankTree, { unit: title === "Shorted" ? "short" : prediction.unit.text, label: `${title}: ${words}` });
    picture.update(lamps);
    return picture.node;
  })()));

/** Draws the whole prediction. */
export function outlook(prediction) {
  const { steady, shorted, inrush, band } = prediction;
  if (!steady.exists) {
    return h("div", { class: "stack" }, h("p", { class: "problem" }, h("strong", {}, "This bank cannot carry this unit. "), steady.note ?? ""));
  }

  const rows = [
    ["Line current once settled", withUnit(steady.lineAmps, "A"), `expect ${range(band.lowAmps, band.highAmps, "A")}`],
    ["Unit", `${withUnit(steady.unitVolts, "V")}, ${withUnit(steady.unitWatts, "W")}`, isNumber(steady.powerFactor) ? `power factor ${steady.powerFactor.toFixed(2)}` : ""],
    ["If the unit were shorted", withUnit(shorted.lineAmps, "A"), `contrast ${isNumber(prediction.contrast) ? prediction.contrast.toFixed(1) : "–"}: ${contrastWord(prediction.contrast)}`],
    ["At switch-on the meter shows first", withUnit(inrush.firstReadingAmps, "A"), `true peak ${withUnit(inrush.peakAmps, "A")}; settled after ${span(inrush.settleSeconds)}`],
  ];
  return h("div", { class: "stack" },
    h("div", { class: "outlook-boards" },
      board("Healthy", prediction, steady.lamps, `${withUnit(steady.lineAmps, "A")}, brightest lamp ${percent(Math.max(...steady.lamps.map((lamp) => lamp.glow ?? 0)))} of its light`),
      board("Shorted", prediction, shorted.lamps, `${withUnit(shorted.lineAmps, "A")}, brightest lamp ${percent(Math.max(...shorted.lamps.map((lamp) => lamp.glow ?? 0)))} of its light`)),
    h("div", { class: "scroll", tabindex: "0", role: "region", "aria-label": "Numbers predicted" }, h("table", { class: "outlook-numbers" }, h("tbody", {}, rows.map(([name, value, more]) =>
      h("tr", {}, h("th", { scope: "row" }, name), h("td", {}, h("strong", {}, value)), h("td", {}, more)))))),
    steady.note ? h("p", { class: "quiet" }, steady.note) : null);
}
