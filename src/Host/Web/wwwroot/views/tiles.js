// All benches on one page, the worst first.

import { attribute, h, text } from "../pieces/dom.js";
import { badge, shape } from "../pieces/shapes.js";
import { headline } from "../pieces/hero.js";
import { clock, isNumber, range, withUnit } from "../model/numbers.js";
import { standing, standingWord, tally, worstFirst } from "../model/order.js";
import { phaseWord } from "../model/words.js";

export function tilesView({ state }) {
  const count = h("p", { class: "tally" });
  const grid = h("ul", { class: "tiles" });
  const none = h("p", { hidden: true }, "No benches yet.");
  const node = h("div", { class: "stack" }, h("div", { class: "tiles-head" }, h("h1", {}, "Benches"), count), none, grid);
  const tiles = new Map();
  let order = "";

  function update() {
    const documents = [...state.benches.values()].map((bench) => bench.document);
    none.hidden = documents.length > 0;
    const sorted = worstFirst(documents);
    for (const document of sorted) {
      if (!tiles.has(document.bench)) {
        tiles.set(document.bench, new Tile());
      }

      tiles.get(document.bench).update(state.benches.get(document.bench));
    }

    // Moved only when the order changed, and never from under the keyboard's focus.
    const wanted = sorted.map((document) => document.bench).join("\n");
    if (wanted !== order) {
      const focused = document.activeElement;
      order = wanted;
      grid.replaceChildren(...sorted.map((document) => tiles.get(document.bench).node));
      if (grid.contains(focused)) {
        focused.focus();
      }

      [...tiles.keys()].filter((name) => !state.benches.has(name)).forEach((name) => tiles.delete(name));
    }

    const counts = tally(documents);
    const key = JSON.stringify(counts);
    if (count.dataset.key !== key) {
      count.dataset.key = key;
      count.replaceChildren(...counts.map((item) => badge(item.standing, `${item.count} ${standingWord(item.standing).toLowerCase()}`)));
    }
  }

  return { node, title: "Benches", follows: null, update, close() {}, standsFor: () => worstFirst([...state.benches.values()].map((bench) => bench.document))[0] };
}

class Tile {
  #standing = null;

  constructor() {
    this.shape = h("span", { class: "tile-shape" });
    this.word = h("span", { class: "tile-word" });
    this.name = h("span", { class: "tile-name" });
    this.unit = h("span", { class: "tile-unit" });
    this.amps = h("span", { class: "tile-amps" });
    this.band = h("span", { class: "tile-band" });
    this.time = h("span", { class: "tile-time" });
    this.link = h("a", {}, h("span", { class: "tile-head" }, this.shape, this.word), this.name, this.amps, this.band, this.unit, this.time);
    this.node = h("li", { class: "tile" }, this.link);
  }

  update({ document, now }) {
    const key = standing(document);
    if (key !== this.#standing) {
      this.#standing = key;
      attribute(this.node, "data-standing", key);
      this.shape.replaceChildren(shape(key));
    }

    attribute(this.link, "href", `#/bench/${encodeURIComponent(document.bench)}`);
    text(this.word, headline(document));
    text(this.name, document.bench);
    text(this.unit, document.unit);
    text(this.amps, withUnit(now?.lineAmps, "A"));
    const band = document.prediction?.band;
    text(this.band, isNumber(band?.lowAmps) ? `of ${range(band.lowAmps, band.highAmps, "A")}` : "no prediction");
    const seconds = now?.seconds ?? document.seconds;
    text(this.time, isNumber(seconds) && document.run ? `${clock(seconds)} of ${clock(document.plannedSeconds)}` : phaseWord(document.phase));
  }
}
