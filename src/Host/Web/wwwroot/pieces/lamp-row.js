// Lamps in a row, small: how one bank would look, for a table.

import { h, s } from "./dom.js";
import { brightness, filamentColour, glowWord, seenColour } from "../model/glow.js";

const STEP = 38;

function bulb(lamp, index) {
  const light = brightness(lamp.filamentKelvin, lamp.glow);
  const colour = light > 0 ? filamentColour(lamp.filamentKelvin) : "#6b7a74";
  const x = STEP * index + STEP / 2;
  return s("g", { transform: `translate(${x} 20)` },
    s("circle", { r: 18.5, fill: colour, opacity: (light * 0.3).toFixed(2) }),
    s("circle", { r: 12, fill: light > 0 ? seenColour(lamp.filamentKelvin, lamp.glow) : "#ffffff", "fill-opacity": (0.05 + 0.8 * light ** 3).toFixed(2), stroke: "#a9b8b2", "stroke-width": 1.3 }),
    s("path", { d: "M-7 3l3.5-6 3.5 6 3.5-6 3.5 6", fill: "none", stroke: light > 0.6 ? "#4a2b00" : colour, "stroke-width": 1.6, "stroke-linejoin": "round" }));
}

/** The row, with the brightest lamp's state in a word beside it. */
export function lampRow(lamps) {
  const real = lamps.filter((lamp) => Number.isFinite(lamp.filamentKelvin));
  const brightest = real.reduce((most, lamp) => (!most || lamp.glow > most.glow ? lamp : most), null);
  const words = brightest ? glowWord(brightest.filamentKelvin, brightest.glow) : "no lamp";
  return h("span", { class: "lamp-row" },
    s("svg", { viewBox: `0 0 ${STEP * Math.max(real.length, 1)} 40`, "aria-hidden": "true" }, real.map(bulb)),
    words);
}
