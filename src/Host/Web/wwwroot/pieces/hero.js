// The strip that is read from across the room: shape, word, current, and how long.

import { h, text, attribute } from "./dom.js";
import { shape } from "./shapes.js";
import { clock, isNumber, parts, range } from "../model/numbers.js";
import { standing, standingWord, worstAlert } from "../model/order.js";
import { causeWord } from "../model/words.js";

/** The large word: a fault by its name, else how the bench stands. */
export function headline(document) {
  const key = standing(document);
  const worst = worstAlert(document);
  return worst && ["critical", "warning", "notice"].includes(key) ? causeWord(worst.cause) : standingWord(key);
}

const DEEDS = {
  critical: "Critical: switch the mains off, then look.",
  warning: "Warning: somebody should look at it now.",
  notice: "A note, nothing to do at once.",
  blind: "Nobody sees the current. Look at the bench itself.",
};

export class Hero {
  #standing = null;

  constructor() {
    this.shape = h("div", { class: "hero-shape" });
    this.name = h("h1", { class: "hero-bench" });
    this.word = h("p", { class: "hero-word", role: "status" });
    this.sentence = h("p", { class: "hero-sentence" });
    this.deed = h("p", { class: "hero-deed" });
    this.number = h("span", { class: "hero-number" });
    this.unit = h("span", { class: "hero-unit" });
    this.expected = h("p", {});
    this.needle = h("i", { class: "needle" });
    this.inBand = h("i", { class: "in-band" });
    this.gauge = h("div", { class: "gauge", role: "img" }, this.inBand, this.needle);
    this.soaked = h("dd", {});
    this.toGo = h("dd", {});
    this.progress = h("progress", { max: "1", value: "0", "aria-label": "Share of the planned time" });
    this.node = h("section", { class: "hero", "aria-label": "How the bench stands" },
      this.shape,
      h("div", { class: "hero-words" }, this.name, this.word, this.deed, this.sentence),
      h("div", { class: "hero-current" }, h("p", { class: "hero-figure" }, this.number, this.unit), this.gauge, this.expected),
      h("div", { class: "hero-time" }, h("dl", {}, h("dt", {}, "soaked"), this.soaked, h("dt", {}, "to go"), this.toGo), this.progress));
  }

  update({ document, now }) {
    const key = standing(document);
    if (key !== this.#standing) {
      this.#standing = key;
      attribute(this.node, "data-standing", key);
      this.shape.replaceChildren(shape(key));
    }

    text(this.name, document.bench);
    text(this.word, headline(document));
    text(this.deed, DEEDS[key] ?? "");
    this.deed.hidden = !DEEDS[key];
    text(this.sentence, document.phase === "ended" ? (document.reasons ?? []).join(" ") : now?.sentence ?? document.sentence ?? "");
    const figure = parts(now?.lineAmps, "A");
    text(this.number, figure.number);
    text(this.unit, now?.overload ? "over range" : figure.unit);
    this.#band(document.prediction?.band, document.prediction?.shorted?.lineAmps, now?.lineAmps);
    const seconds = now?.seconds ?? document.seconds ?? 0;
    text(this.soaked, clock(seconds));
    text(this.toGo, isNumber(document.plannedSeconds) ? clock(Math.max(0, document.plannedSeconds - seconds)) : "–");
    this.progress.value = isNumber(document.plannedSeconds) ? Math.min(1, seconds / document.plannedSeconds) : 0;
  }

  // Where the current stands between nothing and a dead short, with the predicted band marked on the way.
  #band(band, shorted, amps) {
    const drawn = band && isNumber(band.lowAmps) && isNumber(shorted) && shorted > 0;
    this.gauge.hidden = !drawn;
    text(this.expected, drawn ? `expected ${range(band.lowAmps, band.highAmps, "A")}` : "no prediction");
    if (!drawn) {
      return;
    }

    const share = (value) => `${(Math.min(Math.max(value / shorted, 0), 1) * 100).toFixed(2)}%`;
    this.inBand.style.left = share(band.lowAmps);
    this.inBand.style.width = share(band.highAmps - band.lowAmps);
    this.needle.hidden = !isNumber(amps);
    this.needle.style.left = share(amps ?? 0);
    attribute(this.gauge, "aria-label", isNumber(amps)
      ? `${Math.round((amps / shorted) * 100)} percent of the current of a dead short`
      : "no reading");
  }
}
