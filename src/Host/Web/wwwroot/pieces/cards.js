// A view of cards that asks the host again every two seconds and is drawn anew only when an answer differs.

import { h, problemBox } from "./dom.js";
import { get } from "../live/api.js";

const PAUSE = 2000;

/** `cards` makes nodes of an answer; what `passing` names changes each time and is not worth a new drawing. */
export function cardsView({ title, path, cards, passing = [] }) {
  const body = h("div", { class: "cards" });
  let open = true;
  let drawn = "";

  async function ask() {
    const answer = await get(path);
    const key = JSON.stringify(answer, (name, value) => (passing.includes(name) ? undefined : value));
    if (open && key !== drawn) {
      drawn = key;
      body.replaceChildren(...cards(answer));
    }
  }

  const again = () => ask().catch((error) => body.replaceChildren(problemBox(error)));
  again();
  const timer = setInterval(again, PAUSE);
  return { node: h("div", { class: "stack" }, h("h1", {}, title), body), title, follows: null, update() {}, standsFor: () => null, close() {
    open = false;
    clearInterval(timer);
  } };
}
