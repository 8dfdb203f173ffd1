// The bring-up, one lamp after the other: what to switch in next, what it should show, and when to stop.

import { act, h, text, attribute } from "./dom.js";
import { range, withUnit } from "../model/numbers.js";
import { benchPath, post } from "../live/api.js";

/** The rows of a bring-up: what each step expects, and why. Shared with the start page. */
export function stepList(steps, at = -1) {
  return h("ol", { class: "steps" }, steps.map((step, index) => h("li", { class: index < at ? "done" : index === at ? "here" : "", "aria-current": index === at ? "step" : null },
    h("p", {}, h("strong", {}, step.bank), index < at ? " · done" : index === at ? " · now" : ""),
    h("p", {}, `expect ${range(step.expectLowAmps, step.expectHighAmps, "A")}; `, h("strong", {}, `above ${withUnit(step.stopAboveAmps, "A")}: mains off`)),
    h("p", { class: "quiet" }, step.why))));
}

export class BringUp {
  #drawn = "";

  constructor(name) {
    this.say = h("p", { class: "bring-say", role: "status" });
    this.list = h("div", {});
    this.place = h("div", {});
    this.done = h("button", { onclick: () => act(this.done, this.place, () => post(benchPath(name, "/bring-up/next"))) }, "It is in: go on");
    this.leave = h("button", { onclick: () => act(this.leave, this.place, () => post(benchPath(name, "/bring-up/leave"))) }, "Leave the bring-up");
    this.node = h("section", { class: "sheet bring-up", "aria-labelledby": "bring-title", hidden: true },
      h("h2", { id: "bring-title" }, "Bring-up"), this.say, this.list, h("div", { class: "row" }, this.done, this.leave), this.place);
  }

  update({ document }) {
    const bringUp = document.bringUp;
    this.node.hidden = !bringUp || bringUp.over;
    if (this.node.hidden) {
      return;
    }

    attribute(this.node, "data-state", bringUp.state);
    text(this.say, bringUp.sentence);
    this.done.hidden = !(bringUp.at + 1 < bringUp.steps.length);
    const key = JSON.stringify([bringUp.at, bringUp.steps]);
    if (key !== this.#drawn) {
      this.#drawn = key;
      this.list.replaceChildren(stepList(bringUp.steps, bringUp.at));
    }
  }
}
