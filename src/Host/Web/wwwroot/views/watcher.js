// The watcher itself: whether it watches, whom it can tell, whether the record is kept, and the cut-offs.

import { cardsView } from "../pieces/cards.js";
import { act, h } from "../pieces/dom.js";
import { badge } from "../pieces/shapes.js";
import { post } from "../live/api.js";
import { count, span } from "../model/numbers.js";
import { wallTime } from "../model/words.js";

const STATUS = { ok: ["watching", "All is in order"], degraded: ["warning", "Something needs a person"], stuck: ["critical", "A bench is not watched"] };
const ROUTES = { working: ["watching", "Works"], failing: ["warning", "Fails, is tried again"], down: ["critical", "Down"] };
const CUT_OFFS = { armed: ["watching", "Armed"], tripped: ["critical", "Opened by a finding"], lapsed: ["warning", "Opened by silence"] };

export const watcherView = () => cardsView({
  title: "Watcher",
  path: "/api/watcher",
  passing: ["utc", "silentSeconds", "lastCommitUtc"],
  cards: (report) => (report ? sections(report) : [h("p", {}, "This service has nobody to tell and nothing to cut off: a rehearsal, or a page on its own.")]),
});

const sections = (report) => [whole(report), record(report), ...report.routes.map(route), ...report.cutOffs.map(cutOff)];

const table = (rows) => h("table", {}, h("tbody", {}, rows.map(([name, value]) => h("tr", {}, h("th", { scope: "row" }, name), h("td", {}, value)))));

function whole(report) {
  return h("section", { class: "sheet stack" },
    h("h2", {}, report.instance),
    h("p", {}, badge(...STATUS[report.status])),
    report.problems.length ? h("ul", { class: "plain" }, report.problems.map((line) => h("li", {}, line))) : null,
    table([["Program", report.software], ...report.benches.map((one) => [one.bench, one.silentSeconds === null ? "no soak" : "is watched"])]),
    report.routes.length ? null : h("p", { class: "caution" }, "Nobody is told of an alert but this page and the log: the configuration names no route."));
}

function record(report) {
  const { store, forwarding } = report;
  return h("section", { class: "sheet stack" },
    h("h2", {}, "Record"),
    h("p", {}, badge(store.trouble ? "critical" : "watching", store.trouble ?? "Is kept")),
    table([
      ["Entries", `${count(store.accepted)} taken, ${count(store.stored)} on disk, ${count(store.waiting)} wait`],
      ["Lost", count(store.refused)],
      ...(forwarding ? [["Sent to InfluxDB", `${count(forwarding.sent)} points, ${count(forwarding.parked)} refused and set aside`]] : []),
    ]),
    forwarding?.trouble ? h("p", { class: "caution" }, `InfluxDB: ${forwarding.trouble}`) : null);
}

function route(one) {
  const place = h("div", {});
  const button = h("button", { onclick: () => act(button, place, async () => {
    const trial = await post(`/api/watcher/routes/${encodeURIComponent(one.name)}/test`);
    place.replaceChildren(h("p", { role: "status" }, trial.ok ? `Taken after ${span(trial.seconds)}.` : `Not taken: ${trial.error}`));
  }) }, "Send a test");
  return h("section", { class: "sheet stack" },
    h("h2", {}, `Route ${one.name}`),
    h("p", {}, one.taken === 0 && one.state === "working" ? badge("idle", "Nothing to tell yet") : badge(...ROUTES[one.state]), ` · ${one.kind}`),
    table([
      ["Changes", `${count(one.taken)} to tell, ${count(one.told)} told, ${count(one.waiting)} wait`],
      ["Not told", `${count(one.givenUp)} given up, ${count(one.dropped)} crowded out`],
      ["Last told", wallTime(one.lastToldUtc)],
    ]),
    one.inFlood ? h("p", { class: "caution" }, "So much comes that it is told in groups.") : null,
    one.lastError ? h("p", { class: "caution" }, one.lastError) : null,
    h("div", { class: "row" }, button), place);
}

// Resetting is left to whoever may write into the record folder, at the machine: this page may be open to more people than that.
const cutOff = (one) => h("section", { class: "sheet stack" },
  h("h2", {}, `Cut-off of ${one.bench}`),
  h("p", {}, badge(...CUT_OFFS[one.position]), ` · since ${wallTime(one.utc)}`),
  h("p", {}, one.why),
  one.position === "armed" ? null : h("p", {}, "When somebody has looked at the bench: ", h("code", {}, `lampwarden cut-off reset ${one.bench} --by NAME`)),
  h("p", { class: "quiet" }, "A convenience, no protective device."));
