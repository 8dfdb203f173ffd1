// The loop as it stands: lamps glow as their filaments do, with temperature and light beside them in words.

import { s, text, attribute } from "./dom.js";
import { layout } from "../model/circuit.js";
import { brightness, filamentColour, glowWord, seenColour } from "../model/glow.js";
import { withUnit } from "../model/numbers.js";

const FILAMENT = "M-17 7 L-11 -7 L-5.5 7 L0 -7 L5.5 7 L11 -7 L17 7";
const RADIUS = 25;

let serial = 0;

/** A drawing of one bank; `update(lamps)` sets each lamp as { filamentKelvin, glow, amps }. */
export class CircuitPicture {
  #lamps = new Map();

  constructor(tree, { upright = false, unit = "unit", mains = "", label = "The bank" } = {}) {
    const drawing = layout(tree, { upright });
    this.node = s("svg", {
      class: "circuit" + (upright ? " upright" : ""),
      viewBox: `0 0 ${drawing.width} ${drawing.height}`,
      role: "img",
      "aria-label": label,
    });
    this.node.append(
      s("g", { class: "wires" }, drawing.wires.map((wire) => s("polyline", { points: wire.map((point) => point.join(",")).join(" ") }))),
      s("g", { class: "dots" }, drawing.dots.map(([cx, cy]) => s("circle", { cx, cy, r: 3.5 }))),
      source(drawing.source, mains, upright),
      load(drawing.unit, unit, upright),
      ...drawing.parts.map((part) => (part.kind === "lamp" ? this.#lamp(part, upright) : resistor(part))),
    );
  }

  #lamp(part, upright) {
    const gradient = `halo-${serial++}`;
    const stops = [s("stop", { offset: "0", "stop-opacity": "0.95" }), s("stop", { offset: "0.45", "stop-opacity": "0.35" }), s("stop", { offset: "1", "stop-opacity": "0" })];
    const halo = s("circle", { class: "halo", r: RADIUS * 2.1, fill: `url(#${gradient})`, opacity: "0" });
    const glass = s("circle", { class: "glass", r: RADIUS });
    const filament = s("path", { class: "filament", d: FILAMENT, transform: upright ? "rotate(90)" : null });
    const at = upright ? { x: RADIUS + 8, anchor: "start", name: -9, words: 8, kelvin: 24 } : { x: 0, anchor: "middle", name: -33, words: 40, kelvin: 54 };
    const words = s("text", { class: "words", x: at.x, y: at.words, "text-anchor": at.anchor }, "not known");
    const kelvin = s("text", { class: "kelvin", x: at.x, y: at.kelvin, "text-anchor": at.anchor });
    this.#lamps.set(part.index, { stops, halo, filament, glass, words, kelvin });
    return s("g", { class: "lamp", transform: `translate(${part.x} ${part.y})` },
      s("defs", {}, s("radialGradient", { id: gradient }, stops)),
      halo, glass, filament,
      s("text", { class: "name", x: at.x, y: at.name, "text-anchor": at.anchor }, part.name), words, kelvin);
  }

  /** Sets how every lamp glows; the order is that of the bank text. */
  update(lamps) {
    for (const [index, parts] of this.#lamps) {
      const lamp = lamps?.[index] ?? {};
      const light = brightness(lamp.filamentKelvin, lamp.glow);
      const colour = filamentColour(lamp.filamentKelvin ?? 0);
      attribute(parts.halo, "opacity", Math.min(light * 1.05, 1).toFixed(3));
      parts.stops.forEach((stop) => attribute(stop, "stop-color", colour));
      const seen = light > 0 ? seenColour(lamp.filamentKelvin, lamp.glow) : null;
      attribute(parts.filament, "stroke", seen ?? "#6b7a74");
      attribute(parts.filament, "stroke-width", (2 + 1.6 * light).toFixed(2));
      attribute(parts.glass, "fill-opacity", (0.05 + 0.75 * light ** 3).toFixed(3));
      attribute(parts.glass, "fill", seen ?? "#ffffff");
      text(parts.words, glowWord(lamp.filamentKelvin ?? NaN, lamp.glow));
      text(parts.kelvin, lamp.filamentKelvin ? withUnit(lamp.filamentKelvin, "K", lamp.filamentKelvin < 1000 ? 3 : 4) : "");
    }
  }
}

function source({ x, y }, mains, upright) {
  const [volts, hertz] = mains.split(/(?<=V)\s+/);
  return s("g", { class: "source", transform: `translate(${x} ${y})` },
    s("circle", { r: 19 }),
    s("path", { d: "M-10 0 C-7 -9 -3 -9 0 0 S7 9 10 0" }),
    upright
      ? s("text", { x: 0, y: 39, "text-anchor": "middle" }, mains)
      : [s("text", { x: 25, y: -1 }, volts ?? ""), s("text", { x: 25, y: 15 }, hertz ?? "")]);
}

function load({ x, y }, unit, upright) {
  return s("g", { class: "load", transform: `translate(${x} ${y})` },
    upright ? s("rect", { x: -64, y: -17, width: 128, height: 34, rx: 3 }) : s("rect", { x: -56, y: -22, width: 112, height: 44, rx: 3 }),
    s("text", { "text-anchor": "middle", y: 5, textLength: unit.length > 17 ? 104 : null, lengthAdjust: "spacingAndGlyphs" }, unit));
}

function resistor(part) {
  return s("g", { class: "resistor", transform: `translate(${part.x} ${part.y})` },
    s("rect", { x: -24, y: -10, width: 48, height: 20 }),
    s("text", { class: "name", y: -18, "text-anchor": "middle" }, part.name));
}
