// Start of the page: follows the host, picks the view that the address names, and keeps it up to date.

import { attribute, h, text } from "./pieces/dom.js";
import { headline } from "./pieces/hero.js";
import { watchTheWatcher } from "./pieces/watcher.js";
import { onLocked, get } from "./live/api.js";
import { Stream } from "./live/stream.js";
import { empty, take } from "./model/state.js";
import { standing } from "./model/order.js";
import { tilesView } from "./views/tiles.js";
import { benchView } from "./views/bench.js";
import { startView } from "./views/start.js";
import { chooseView } from "./views/choose.js";
import { runsView } from "./views/runs.js";
import { runView } from "./views/run.js";
import { metersView } from "./views/meters.js";
import { watcherView } from "./views/watcher.js";
import { tokenView } from "./views/token.js";

const state = empty();
const main = document.getElementById("main");
const link = document.getElementById("link");
const stale = document.getElementById("stale");
let view = null;
let locked = false;
let asked = false;
let routed = null;
let drawnFor = null;

const ROUTES = {
  "": () => (state.benches.size === 1 ? benchView({ state, name: [...state.benches.keys()][0] }) : tilesView({ state })),
  benches: () => tilesView({ state }),
  bench: (name) => benchView({ state, name }),
  start: (name) => startView({ state, name, go }),
  choose: () => chooseView({ state }),
  runs: () => runsView(),
  run: (run, also) => runView({ run, also }),
  meters: () => metersView(),
  watcher: () => watcherView(),
};

const stream = new Stream({
  onEvent(type, data, id) {
    const changed = take(state, type, data, id);
    if (type === "reset") {
      text(link, "live");
      // Which benches there are decides what the first page is.
      if (view === null || routed === "") {
        show();
      } else {
        view.reset?.();
      }
    }

    if (changed.length > 0) {
      soon();
    }
  },
  onStale(seconds) {
    stale.hidden = seconds === null;
    // Nobody across the room may take what was true a minute ago for what is true now.
    document.body.classList.toggle("old", seconds !== null);
    title();
    text(link, seconds === null ? "live" : "not live");
    if (seconds !== null) {
      text(stale, `Nothing heard from the host for ${Math.round(seconds)} s. What is shown below is old: look at the bench itself.`);
    }
  },
  onRefused() {
    get("/api/benches").catch(() => {});
  },
});

function go(address) {
  location.hash = address;
}

function show() {
  const [, route = "", ...words] = location.hash.split("/").map(decodeURIComponent);
  routed = locked ? null : route;
  drawnFor = location.hash;
  view?.close();
  view = locked ? tokenView({ entered }) : (ROUTES[route] ?? ROUTES[""])(...words);
  main.replaceChildren(view.node);
  for (const item of document.querySelectorAll(".top nav a")) {
    const own = item.getAttribute("href").split("/")[1];
    const here = own === route || (own === "" && ["bench", "benches"].includes(route)) || (own === "runs" && route === "run");
    attribute(item, "aria-current", here ? "page" : null);
    if (here) {
      // On a narrow screen the row of names is longer than the screen.
      item.scrollIntoView({ block: "nearest", inline: "nearest" });
    }
  }

  if (!locked) {
    stream.follow(view.follows ?? null);
  }

  view.update();
  title();
}

function entered() {
  locked = false;
  stream.reopen();
  show();
}

onLocked(() => {
  if (!locked) {
    locked = true;
    show();
  }
});

function soon() {
  if (!asked) {
    asked = true;
    requestAnimationFrame(() => {
      asked = false;
      view?.update();
    });
  }

  title();
}

// The name of the tab says what stands worst, for a page that lies behind others.
function title() {
  const bench = view?.standsFor?.();
  const worst = bench && ["critical", "warning", "blind"].includes(standing(bench)) ? `${headline(bench)}: ${bench.bench}, ` : "";
  const wanted = `${stale.hidden ? worst : "Not live: "}${view?.title ?? ""}, Lampwarden`;
  if (document.title !== wanted) {
    document.title = wanted;
  }
}

addEventListener("hashchange", () => {
  // The first drawing may have come before the event that asks for it: what somebody typed by then must stay.
  if (location.hash === drawnFor && view !== null) {
    return;
  }

  show();
  main.focus({ preventScroll: true });
  scrollTo(0, 0);
});

main.replaceChildren(h("p", {}, "Asking the host…"));
stream.follow(null);
watchTheWatcher(document.getElementById("watcher"));
if (["#/choose", "#/runs", "#/meters", "#/watcher"].some((route) => location.hash.startsWith(route)) || location.hash.startsWith("#/run/")) {
  show();
}
