// The meters: whether they answer, how fast, how evenly, and what was refused and why.

import { cardsView } from "../pieces/cards.js";
import { h } from "../pieces/dom.js";
import { badge } from "../pieces/shapes.js";
import { count, isNumber, span, withUnit } from "../model/numbers.js";
import { gapWord } from "../model/words.js";

const QUANTITIES = { "line-current": "line current", "mains-voltage": "mains", lineCurrent: "line current", mainsVoltage: "mains" };

export const metersView = () => cardsView({
  title: "Meters",
  path: "/api/meters",
  cards: (meters) => (meters.length ? meters.map(card) : [h("p", {}, "No meter is open.")]),
});

function card(meter) {
  const refused = Object.entries(meter.gaps ?? {});
  const rate = isNumber(meter.ratePerSecond) ? meter.ratePerSecond.toFixed(2) : "–";
  const rows = [
    ["Rate", `${rate} of ${meter.askedPerSecond} readings a second`],
    ["Jitter", withUnit(meter.jitterMs / 1000, "s", 2)],
    ["Answers after", `${withUnit(meter.latencyMs / 1000, "s", 2)}, at most ${withUnit(meter.longestLatencyMs / 1000, "s", 2)}`],
    ["Readings", `${count(meter.readings)}, ${count(meter.overloads)} over range`],
    ["Lines", `${count(meter.linesReceived)} came, ${count(meter.linesUsed)} used, ${count(meter.linesPassedOver)} passed over`],
    ["Opened", `${count(meter.openings)} ${meter.openings === 1 ? "time" : "times"}`],
  ];
  return h("section", { class: "sheet stack" },
    h("h2", {}, `${meter.bench}, ${meter.name}`),
    h("p", {}, badge(meter.connected ? "watching" : "blind", meter.connected ? "Answers" : "Does not answer"), ` · ${QUANTITIES[meter.quantity] ?? meter.quantity} · ${meter.place}`),
    h("p", { class: "quiet" }, meter.identity ?? "gives no name"),
    h("table", {}, h("tbody", {}, rows.map(([name, value]) => h("tr", {}, h("th", { scope: "row" }, name), h("td", {}, value))))),
    h("h3", {}, "Refused or missed"),
    refused.length === 0 ? h("p", { class: "quiet" }, "None.") : h("ul", { class: "plain" }, refused.map(([reason, times]) => h("li", {}, `${count(times)} × ${gapWord(reason)}`))),
    meter.problems?.length ? [h("h3", {}, "To know"), h("ul", { class: "plain" }, meter.problems.map((line) => h("li", {}, line)))] : null,
    meter.silentSeconds > 2 ? h("p", { class: "caution" }, `Silent for ${span(meter.silentSeconds)}.`) : null);
}
