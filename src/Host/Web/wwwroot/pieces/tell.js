// Telling the watch what somebody did, so that it is not taken for a fault.

import { act, h } from "./dom.js";
import { benchPath, post } from "../live/api.js";

const DEEDS = [
  ["load-changed", "I changed the load", "Told: the watch learns the new level."],
  ["cycles-by-itself", "The unit switches by itself", "Told: its switching counts as healthy from now on."],
  ["meter-changed", "I changed the meter's range", "Told: the watch learns the level anew."],
];

export class Tell {
  constructor(name) {
    const place = h("div", { role: "status" });
    const words = h("input", { "aria-label": "What you did, in your own words", maxlength: "500", placeholder: "In your own words (optional)" });
    const buttons = DEEDS.map(([kind, label, told]) => {
      const button = h("button", { class: "small", onclick: () => act(button, place, async () => {
        await post(benchPath(name, "/announcements"), { kind, detail: words.value });
        words.value = "";
        place.replaceChildren(h("p", {}, told));
      }) }, label);
      return button;
    });
    this.node = h("div", { class: "tell", role: "group", "aria-labelledby": "tell-title" },
      h("h3", { id: "tell-title" }, "Tell the watch"), h("div", { class: "row" }, buttons, words), place);
  }
}
