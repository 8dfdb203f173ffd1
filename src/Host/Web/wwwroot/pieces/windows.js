// The stretches of runs that the host has given, coarse to fine, and which of them to draw now.

import { get, query, runPath } from "../live/api.js";
import { fineEnough, request } from "../model/zoom.js";
import { columnsOf, rangeOf, valueAt } from "../model/columns.js";

const KEPT = 24;

export class Windows {
  #runs;
  #draw;
  #whole = [];
  #answers = [];
  #shown = null;
  #asking = new Map();
  #window = { from: 0, to: 1 };
  #pixels = 1000;

  constructor(runs, draw) {
    [this.#runs, this.#draw] = [runs, draw];
  }

  /** The whole of every run, for the first drawing. */
  async first(pixels) {
    this.#whole = await Promise.all(this.#runs.map((run) => this.#ask(run, { points: 2 ** Math.ceil(Math.log2(pixels)) })));
    this.#shown = this.#whole;
  }

  /** Draws what there is of a window, and asks for more where it is too coarse. */
  want(window, extent, pixels) {
    [this.#window, this.#pixels] = [window, pixels];
    const fine = this.#answers.find((answers) => answers.every((answer) => fineEnough(answer, window, pixels)));
    if (fine ?? this.#whole.every((answer) => fineEnough(answer, window, pixels))) {
      this.#use(fine ?? this.#whole);
      return;
    }

    // Meanwhile whatever covers the window is shown, the finest first.
    const covers = this.#answers.filter((answers) => answers.every((answer) => answer.from <= window.from && answer.to >= window.to));
    this.#use(covers.sort((a, b) => a[0].bucketSeconds - b[0].bucketSeconds)[0] ?? this.#whole);
    const wanted = request(window, extent, pixels);
    const key = JSON.stringify(wanted);
    if (!this.#asking.has(key)) {
      this.#asking.set(key, this.#fetch(wanted).finally(() => this.#asking.delete(key)));
    }
  }

  show() {
    this.#drawNow();
  }

  /** What lies under an instant, in words. */
  under(seconds, words) {
    return (this.#shown ?? []).map((answer, index) => {
      const value = valueAt(answer, seconds);
      return value ? (this.#runs.length > 1 ? `${this.#runs[index]}: ` : "") + words(value.seconds, value.low, value.high) : "";
    }).filter(Boolean).join(" · ");
  }

  async #fetch(wanted) {
    const answers = await Promise.all(this.#runs.map((run) => this.#ask(run, wanted)));
    this.#answers.unshift(answers);
    this.#answers.length = Math.min(this.#answers.length, KEPT);
    const covers = answers.every((answer) => answer.from <= this.#window.from && answer.to >= this.#window.to);
    if (covers && answers[0].bucketSeconds < this.#shown[0].bucketSeconds) {
      this.#use(answers);
    }
  }

  async #ask(run, { from, to, points }) {
    const answer = await get(runPath(run, "/series") + query({ fromSeconds: from, toSeconds: to, points }));
    return { ...answer, from: answer.fromSeconds, to: answer.toSeconds };
  }

  #use(answers) {
    this.#shown = answers;
    this.#drawNow();
    // For whoever measures how fast this is; one mark at a time, so that they do not pile up.
    performance.clearMarks("trace-drawn");
    performance.mark("trace-drawn", { detail: { bucketSeconds: answers[0].bucketSeconds, fine: answers.every((answer) => fineEnough(answer, this.#window, this.#pixels)) } });
  }

  #drawNow() {
    if (this.#shown) {
      const columns = columnsOf(this.#shown);
      this.#draw(columns, rangeOf(columns, this.#window));
    }
  }
}
