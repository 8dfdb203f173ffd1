// What is wrong with the watcher itself, across the top of every view: then silence on a bench means nothing.

import { act, h } from "./dom.js";
import { badge } from "./shapes.js";
import { get, post } from "../live/api.js";
import { causeWord, stateWord } from "../model/words.js";

const PAUSE = 5000;

/** Fills `place` with the open alerts about the watcher, and keeps asking. */
export function watchTheWatcher(place) {
  let drawn = "";
  const ask = async () => {
    const alerts = await get("/api/watcher/alerts").catch(() => null);
    const key = JSON.stringify(alerts);
    if (alerts && key !== drawn) {
      drawn = key;
      place.replaceChildren(...alerts.map(line));
      place.hidden = alerts.length === 0;
    }

    setTimeout(ask, PAUSE);
  };

  function line(alert) {
    const problem = h("span", {});
    const button = h("button", { class: "small", onclick: () => act(button, problem, async () => {
      await post(`/api/watcher/alerts/${alert.number}/acknowledge`);
      button.hidden = true;
    }) }, "Acknowledge");
    return h("p", { class: "row" }, badge(alert.severity, causeWord(alert.cause)), ` ${alert.text} `,
      h("span", { class: "quiet" }, stateWord(alert.state)), alert.state === "acknowledged" ? null : button, problem);
  }

  ask();
}
