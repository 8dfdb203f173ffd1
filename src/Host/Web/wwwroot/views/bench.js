// One bench: what it does, whether it should, and what a person can do.

import { act, h, text } from "../pieces/dom.js";
import { Hero } from "../pieces/hero.js";
import { CircuitPicture } from "../pieces/circuit-picture.js";
import { Readouts } from "../pieces/readouts.js";
import { Plot, reading } from "../pieces/plot.js";
import { Inrush } from "../pieces/inrush.js";
import { Alerts } from "../pieces/alerts.js";
import { BringUp } from "../pieces/bring-up.js";
import { Tell } from "../pieces/tell.js";
import { benchPath, get, post, runPath } from "../live/api.js";
import { layout } from "../model/circuit.js";
import { fill } from "../model/state.js";
import { traceRange } from "../model/trace.js";
import { isNumber } from "../model/numbers.js";
import { wallTime } from "../model/words.js";

const narrow = matchMedia("(max-width: 640px)");

export function benchView({ state, name }) {
  const hero = new Hero();
  const board = h("div", { class: "board bench-board" });
  const readouts = new Readouts();
  const inrush = new Inrush();
  const alerts = new Alerts();
  const bringUp = new BringUp(name);
  const facts = h("p", { class: "quiet" });
  const deeds = new Deeds(name);
  const plot = new Plot({
    label: `Trace of the line current of ${name} since switch-on`,
    height: narrow.matches ? 220 : 270,
    describe: (seconds) => plot.say(under(state.benches.get(name)?.trace, seconds)),
  });
  const missing = h("p", { class: "problem", hidden: true }, `There is no bench '${name}'. `, h("a", { href: "#/" }, "See all benches"));
  const node = h("div", { class: "bench-view" }, missing, hero.node, bringUp.node,
    h("div", { class: "bench-right" }, alerts.node,
      h("section", { class: "sheet trace-box", "aria-labelledby": "trace-title" },
        h("h2", { id: "trace-title" }, "Line current"), h("div", { class: "trace-row" }, plot.node, inrush.node), facts)),
    h("div", { class: "bench-left" }, board, readouts.node, deeds.node));
  let picture = null;
  let drawn = "";
  let asked = null;
  let shownAt = -Infinity;
  let timer = null;

  async function whole(bench) {
    asked = bench.document.run + state.epoch;
    const answer = await get(benchPath(name, "/trace")).catch(() => null);
    if (answer && !fill(state, name, answer)) {
      asked = null;
    }

    update();
  }

  function draw(bench) {
    const { document, now } = bench;
    const key = JSON.stringify([document.bankTree, document.unit, narrow.matches]);
    if (key !== drawn && document.bankTree) {
      drawn = key;
      // A long chain would be too small to read across a telephone: it goes down the screen instead.
      const upright = narrow.matches && layout(document.bankTree).width > 560;
      picture = new CircuitPicture(document.bankTree, { upright, unit: document.unit, mains: document.mains, label: `Bank ${document.bank} before ${document.unit} at ${document.mains}` });
      board.replaceChildren(picture.node);
    }

    picture?.update(now?.lamps);
  }

  function trace(bench) {
    const { document, trace, now } = bench;
    const end = Math.max(trace.last, now?.seconds ?? 0, 10);
    plot.bands = isNumber(document.prediction?.band?.lowAmps) ? [{ low: document.prediction.band.lowAmps, high: document.prediction.band.highAmps }] : [];
    plot.marks = (document.findings ?? []).map((finding) => ({ seconds: finding.onsetSeconds, severity: finding.severity, label: finding.signature }));
    const start = Math.max(0, trace.seconds[0] ?? 0);
    plot.show([trace.seconds, trace.low, trace.high], { from: Math.min(start, end - 10), to: end }, traceRange(trace, document.prediction));
    inrush.update(trace, document.prediction);
  }

  function update() {
    const bench = state.benches.get(name);
    missing.hidden = Boolean(bench) || state.epoch === null;
    hero.node.hidden = !bench;
    if (!bench) {
      return;
    }

    if (bench.document.run && asked !== bench.document.run + state.epoch) {
      whole(bench);
    }

    hero.update(bench);
    draw(bench);
    readouts.update(bench.now);
    alerts.update(bench.document);
    bringUp.update(bench);
    deeds.update(bench.document);
    text(facts, bench.document.run ? `Run ${bench.document.run}, begun ${wallTime(bench.document.startedUtc)}. ${bench.document.bank} before ${bench.document.unit}.` : "");
    scheduleTrace();
  }

  // Readings may come fifty times a second; nobody sees more than a few drawings.
  function scheduleTrace() {
    timer ??= setTimeout(() => {
      timer = null;
      shownAt = performance.now();
      const bench = state.benches.get(name);
      if (bench) {
        trace(bench);
      }
    }, Math.max(0, shownAt + 200 - performance.now()));
  }

  return { node, title: name, follows: name, update, reset: () => (asked = null), close: () => {
    clearTimeout(timer);
    timer = 0;
    plot.close();
  }, standsFor: () => state.benches.get(name)?.document };
}

function under(trace, seconds) {
  if (!trace || !Number.isFinite(seconds) || trace.seconds.length === 0) {
    return "";
  }

  let index = trace.seconds.findIndex((at) => at > seconds) - 1;
  index = index < 0 ? trace.seconds.length - 1 : index;
  return reading(trace.seconds[index], trace.low[index], trace.high[index]);
}

/** What a person tells the watch and the record, and how a soak is ended. */
class Deeds {
  constructor(name) {
    this.name = name;
    this.place = h("div", {});
    this.end = h("button", { onclick: () => this.#end() }, "End this soak");
    this.tell = new Tell(name);
    this.start = h("a", { class: "button", href: `#/start/${encodeURIComponent(name)}` }, "Start a soak here");
    this.report = h("a", { class: "button" }, "Look back at this run");
    this.text = h("input", { "aria-label": "Note for the run", maxlength: "500", placeholder: "A note for the record" });
    this.keep = h("button", {}, "Keep note");
    this.form = h("form", { class: "row note-form", onsubmit: (event) => this.#note(event) }, this.text, this.keep);
    this.node = h("section", { class: "sheet deeds", "aria-label": "What you can do" },
      h("div", { class: "row" }, this.start, this.end, this.report), this.tell.node, this.form, this.place);
  }

  update(document) {
    const runs = document.run !== null && !["ended", "idle"].includes(document.phase);
    this.start.hidden = !document.canStart;
    this.end.hidden = !(runs || document.phase === "waiting") || !document.canEnd;
    this.tell.node.hidden = !runs;
    this.form.hidden = !document.run;
    this.report.hidden = !document.run;
    this.report.href = `#/run/${encodeURIComponent(document.run ?? "")}`;
  }

  async #end() {
    this.place.replaceChildren(h("div", { class: "caution" },
      h("p", {}, "Ending judges the run as it stands. It does not switch the mains off: the unit stays live until you do."),
      h("div", { class: "row" },
        this.sure ??= h("button", { class: "main", onclick: () => act(this.sure, this.place, () => post(benchPath(this.name, "/soak/end"))) }, "End it now"),
        h("button", { onclick: () => this.place.replaceChildren() }, "Keep soaking"))));
    this.sure.focus();
  }

  #note(event) {
    event.preventDefault();
    act(this.keep, this.place, async () => {
      await post(benchPath(this.name, "/notes"), { text: this.text.value });
      this.text.value = "";
      this.place.replaceChildren(h("p", { role: "status" }, "Kept with the run."));
    });
  }
}
