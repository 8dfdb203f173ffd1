// Asked for when the host wants a token: entering one, and how to make one.

import { act, h } from "../pieces/dom.js";
import { post } from "../live/api.js";

export function tokenView({ entered }) {
  const place = h("div", {});
  const input = h("input", { id: "token", type: "password", autocomplete: "current-password", required: true });
  const enter = h("button", { class: "main" }, "Open the page");
  const form = h("form", {
    class: "sheet stack",
    onsubmit: (event) => {
      event.preventDefault();
      act(enter, place, async () => {
        await post("/api/session", { token: input.value });
        input.value = "";
        entered();
      });
    },
  }, h("div", { class: "field" }, h("label", { for: "token" }, "Token", h("small", {}, "the first line of the file that web.tokenFile names on the host")), input), h("div", {}, enter), place);
  const how = h("section", { class: "sheet stack", "aria-labelledby": "how" },
    h("h2", { id: "how" }, "How to make one"),
    h("p", {}, "On the machine that runs Lampwarden:"),
    h("p", {}, h("code", {}, "lampwarden token page.token")),
    h("p", {}, "Then name that file in the configuration, and start again:"),
    h("p", {}, h("code", {}, "\"web\": { \"address\": \"http://0.0.0.0:5080\", \"tokenFile\": \"page.token\" }")),
    h("p", { class: "quiet" }, "The page is not encrypted by itself: on a network you do not trust, put a proxy that speaks https before it."));
  return { node: h("div", { class: "stack narrow" }, h("h1", {}, "This page wants a token"), form, how), title: "Token", update() {}, close() {}, standsFor: () => null };
}
