// The event stream: one connection, which the browser mends by itself and resumes from the last event's id.

/** Seconds without a word after which the page must say that it may be out of date; the host speaks every 2 s. */
export const STALE_SECONDS = 6;

const TYPES = ["reset", "bench", "readings", "now"];

/**
 * Follows the host. `onEvent(type, data, id)` hears every event; `onStale(seconds | null)` hears when the host has been
 * silent too long, and null when it speaks again; `onRefused()` when the host will not have us.
 */
export class Stream {
  #source = null;
  #bench = null;
  #lastId = null;
  #heard = performance.now();
  #stale = false;
  #late = 0;

  constructor({ onEvent, onStale, onRefused }) {
    Object.assign(this, { onEvent, onStale, onRefused });
    setInterval(() => this.#check(), 500);
    addEventListener("online", () => this.#open());
    document.addEventListener("visibilitychange", () => {
      if (!document.hidden && this.#source?.readyState === EventSource.CLOSED) {
        this.#open();
      }
    });
  }

  /** Readings are sent of one bench alone; which one may change at any time without losing events. */
  follow(bench) {
    if (this.#source && this.#bench === bench) {
      return;
    }

    this.#bench = bench;
    this.#open();
  }

  /** Asks again at once: the host would not have us before, and may now. */
  reopen() {
    this.#open();
  }

  #open() {
    this.#source?.close();
    const parameters = new URLSearchParams();
    if (this.#bench) {
      parameters.set("bench", this.#bench);
    }

    if (this.#lastId) {
      parameters.set("after", this.#lastId);
    }

    const source = new EventSource(`/api/events?${parameters}`);
    this.#source = source;
    const heard = (event) => {
      this.#heard = performance.now();
      this.#check();
      return event;
    };
    source.addEventListener("open", heard);
    source.addEventListener("heartbeat", heard);
    for (const type of TYPES) {
      source.addEventListener(type, (event) => {
        heard(event);
        this.#lastId = event.lastEventId || this.#lastId;
        this.onEvent(type, JSON.parse(event.data), event.lastEventId || null);
      });
    }

    source.addEventListener("error", () => {
      // The browser gives up for good on any answer but 200; a lost connection it mends by itself.
      if (source.readyState === EventSource.CLOSED && source === this.#source) {
        this.onRefused();
        setTimeout(() => source === this.#source && this.#open(), 3000);
      }
    });
  }

  #check() {
    const silent = (performance.now() - this.#heard) / 1000;
    if (silent > STALE_SECONDS) {
      // A page that was held up itself finds the host's words waiting: only the second look in a row counts.
      this.#late++;
      if (this.#late > 1) {
        this.#stale = true;
        this.onStale(silent);
      }

      return;
    }

    this.#late = 0;
    if (this.#stale) {
      this.#stale = false;
      this.onStale(null);
    }
  }
}
