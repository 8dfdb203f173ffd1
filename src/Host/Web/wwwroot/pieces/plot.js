// One trace: least and greatest of each bucket, the band that was predicted, findings as marked lines.
// uPlot is loaded on first use; a build without npm has none, and says so in its place.

import { h, text } from "./dom.js";
import { clock, parts, withUnit } from "../model/numbers.js";

let loading = null;

/** uPlot's constructor, or null where this build has none. */
export const plotting = () => (loading ??= import("/parts/uPlot.esm.js").then((module) => module.default, () => null));

const css = (name) => getComputedStyle(document.documentElement).getPropertyValue(name).trim();

/** Steps of the time axis in seconds: those a clock face has. */
const STEPS = [0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10, 15, 30, 60, 120, 300, 600, 900, 1800, 3600, 7200, 10800, 21600, 43200, 86400, 172800, 345600, 864000];

const timeAxis = (_, splits) => splits.map((at) => {
  const step = splits.length > 1 ? splits[1] - splits[0] : 1;
  if (step < 1) {
    return `${clock(Math.floor(at + 1e-9))}${(at % 1).toFixed(2).slice(1)}`;
  }

  return step >= 60 && at < 86400 * 30 ? clock(at).replace(/:\d\d$/, "") : clock(at);
});

const ampsAxis = (_, splits) => {
  const large = Math.max(...splits.map(Math.abs)) >= 1;
  const step = splits.length > 1 ? splits[1] - splits[0] : 1;
  const shown = large ? step : step * 1000;
  const decimals = [0, 1, 2, 3, 4].find((places) => Math.abs(shown * 10 ** places - Math.round(shown * 10 ** places)) < 1e-6) ?? 5;
  return splits.map((at) => (large ? at : at * 1000).toFixed(decimals));
};

export class Plot {
  #plot = null;
  #data = [[], [], []];
  #window = null;
  #amps = null;
  #series;

  /** `series`: one name for each run shown; each takes two columns (least and greatest) after the seconds. */
  constructor({ label, height = 300, series = ["line current"], describe = null }) {
    this.#series = series;
    this.height = height;
    this.marks = [];
    this.bands = [];
    this.gaps = [];
    this.canvas = h("div", { class: "canvas" });
    this.said = h("span", {}, "");
    this.unit = h("span", {}, "line current");
    this.node = h("div", { class: "plot", role: "group", tabindex: "0", "aria-label": label },
      h("p", { class: "said" }, this.unit, this.said), this.canvas);
    this.describe = describe;
    this.ready = this.#make();
    this.watcher = new ResizeObserver(() => this.#fit());
    this.watcher.observe(this.canvas);
  }

  get width() {
    return Math.max(this.canvas.clientWidth, 200);
  }

  get window() {
    return this.#window;
  }

  /** Columns: seconds, then least and greatest of each series; `amps` the range of the current axis. */
  show(data, window, amps) {
    [this.#data, this.#window, this.#amps] = [data, window, amps];
    const { unit } = parts(amps ? Math.max(Math.abs(amps[0]), Math.abs(amps[1])) : 0.1, "A");
    text(this.unit, `${this.#series.length > 1 ? "line currents" : "line current"} in ${unit}, against time since switch-on`);
    this.#draw();
  }

  /** Moves the window over the data at hand, at once. */
  look(window) {
    this.#window = window;
    this.#plot?.setScale("x", { min: window.from, max: window.to });
  }

  say(words) {
    text(this.said, words);
  }

  close() {
    this.watcher.disconnect();
    this.#plot?.destroy();
  }

  async #make() {
    const uPlot = await plotting();
    if (!uPlot) {
      this.canvas.replaceChildren(h("p", { class: "none" }, "No traces in this build: it was made without npm. Numbers, lamps and alerts are not concerned."));
      return;
    }

    const colours = [css("--trace"), "#b4530a"];
    const line = (index) => ({ stroke: colours[index], width: 1.6, dash: index ? [9, 5] : undefined, points: { show: false }, spanGaps: false });
    this.#plot = new uPlot({
      width: this.width,
      height: this.height,
      pxAlign: 0,
      padding: [8, 28, 0, 0],
      legend: { show: false },
      cursor: { drag: { x: false, y: false, setScale: false }, points: { show: false } },
      scales: {
        x: { time: false, range: (_, low, high) => (this.#window ? [this.#window.from, this.#window.to] : [low ?? 0, high ?? 1]) },
        y: { range: () => this.#amps ?? [0, 0.1] },
      },
      axes: [
        { values: timeAxis, incrs: STEPS, stroke: css("--ink-quiet"), grid: { stroke: "#dbe3df", width: 1 }, ticks: { show: false }, font: "14px Barlow Semi Condensed, sans-serif", space: 90, size: 30 },
        { values: ampsAxis, stroke: css("--ink-quiet"), grid: { stroke: "#dbe3df", width: 1 }, ticks: { show: false }, font: "14px Barlow Semi Condensed, sans-serif", size: 52 },
      ],
      series: [{}, ...this.#series.flatMap((_, index) => [line(index), line(index)])],
      bands: this.#series.map((_, index) => ({ series: [2 * index + 2, 2 * index + 1], fill: colours[index] + "38" })),
      hooks: { drawClear: [(plot) => this.#under(plot)], draw: [(plot) => this.#over(plot)], setCursor: [(plot) => this.describe?.(plot.posToVal(plot.cursor.left, "x"), plot.cursor)] },
    }, this.#data, this.canvas);
    this.#draw();
  }

  #draw() {
    if (this.#plot) {
      this.#plot.setData(this.#data, false);
      this.#plot.setScale("x", this.#window ? { min: this.#window.from, max: this.#window.to } : { min: 0, max: 1 });
    }
  }

  #fit() {
    if (this.#plot && Math.abs(this.#plot.width - this.width) > 1) {
      this.#plot.setSize({ width: this.width, height: this.height });
    }
  }

  // Beneath the trace: the predicted band with hatched edges, and the gaps.
  #under(plot) {
    const { ctx, bbox } = plot;
    const y = (amps) => Math.min(Math.max(plot.valToPos(amps, "y", true), bbox.top), bbox.top + bbox.height);
    const x = (seconds) => Math.min(Math.max(plot.valToPos(seconds, "x", true), bbox.left), bbox.left + bbox.width);
    ctx.save();
    for (const band of this.bands) {
      const [top, bottom] = [y(band.high), y(band.low)];
      ctx.fillStyle = css("--band");
      ctx.fillRect(bbox.left, top, bbox.width, bottom - top);
      ctx.strokeStyle = "#5d8d80";
      ctx.lineWidth = devicePixelRatio;
      ctx.setLineDash([6 * devicePixelRatio, 4 * devicePixelRatio]);
      for (const edge of [top, bottom]) {
        if (edge > bbox.top && edge < bbox.top + bbox.height) {
          ctx.strokeRect(bbox.left, edge, bbox.width, 0);
        }
      }
    }

    ctx.setLineDash([]);
    ctx.fillStyle = "#c9ccd1";
    for (const gap of this.gaps) {
      ctx.fillRect(x(gap.fromSeconds), bbox.top, Math.max(x(gap.toSeconds) - x(gap.fromSeconds), devicePixelRatio), bbox.height);
    }

    ctx.restore();
  }

  // Above it: where findings began, with a number that the list beside the trace repeats.
  #over(plot) {
    const { ctx, bbox } = plot;
    const ratio = devicePixelRatio;
    ctx.save();
    ctx.font = `600 ${14 * ratio}px Barlow Semi Condensed, sans-serif`;
    ctx.textBaseline = "top";
    ctx.textAlign = "left";
    let taken = -Infinity;
    let row = 0;
    for (const mark of this.marks) {
      const at = plot.valToPos(mark.seconds, "x", true);
      if (at < bbox.left - 1 || at > bbox.left + bbox.width + 1) {
        continue;
      }

      ctx.strokeStyle = ctx.fillStyle = mark.severity === "critical" ? css("--critical") : mark.severity === "warning" ? "#7a4b00" : css("--notice");
      ctx.lineWidth = (mark.severity === "critical" ? 2.5 : 1.5) * ratio;
      ctx.setLineDash(mark.severity === "critical" ? [] : [5 * ratio, 4 * ratio]);
      ctx.beginPath();
      ctx.moveTo(at, bbox.top);
      ctx.lineTo(at, bbox.top + bbox.height);
      ctx.stroke();
      const width = ctx.measureText(mark.label).width;
      row = at < taken ? (row + 1) % 4 : 0;
      const left = at + width + 8 * ratio > bbox.left + bbox.width ? at - width - 5 * ratio : at + 5 * ratio;
      ctx.fillText(mark.label, left, bbox.top + (3 + 17 * row) * ratio);
      taken = Math.max(taken, left + width + 8 * ratio);
    }

    ctx.restore();
  }
}

/** The words for what lies under the cursor. */
export const reading = (seconds, low, high) =>
  low === null || low === undefined ? `${clock(seconds)}: no reading` : `${clock(seconds)}: ${low === high ? withUnit(low, "A", 4) : `${withUnit(low, "A", 4)} to ${withUnit(high, "A", 4)}`}`;
