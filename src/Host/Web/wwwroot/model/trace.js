// Readings of one run in bounded memory: buckets of least and greatest that grow longer as the run does, the newest
// readings as they came, and the first ones (the inrush) for good.

const BUCKETS = 1500;
const RECENT = 600;
const FIRST = 240;

export class Trace {
  constructor() {
    this.bucketSeconds = 0;
    this.seconds = [];
    this.low = [];
    this.high = [];
    this.recent = [];
    this.first = [];
    this.last = -Infinity;
  }

  /** From the host's answer: `bucketSeconds`, columns `seconds`, `lowAmps`, `highAmps`, and `first` readings. */
  static from(answer) {
    const trace = new Trace();
    trace.bucketSeconds = answer.bucketSeconds ?? 0;
    trace.seconds = [...answer.seconds];
    trace.low = [...answer.lowAmps];
    trace.high = [...answer.highAmps];
    trace.first = (answer.first?.seconds ?? []).map((at, index) => [at, answer.first.amps[index]]);
    trace.last = answer.lastSeconds ?? answer.seconds.at(-1) ?? -Infinity;
    trace.#halve();
    return trace;
  }

  /** Takes readings in order; one that was taken before is passed over. A null is a gap. */
  append(seconds, amps) {
    for (let index = 0; index < seconds.length; index++) {
      if (seconds[index] > this.last) {
        this.#take(seconds[index], amps[index]);
      }
    }

    if (this.recent.length > 2 * RECENT) {
      this.recent = this.recent.slice(-RECENT);
    }

    this.#halve();
  }

  /** The newest readings later than `seconds`, as pairs. */
  after(seconds) {
    return this.recent.filter(([at]) => at > seconds);
  }

  #take(at, amps) {
    this.last = at;
    this.recent.push([at, amps]);
    if (this.first.length < FIRST) {
      this.first.push([at, amps]);
    }

    const newest = this.seconds.length - 1;
    const joins = newest >= 0 && this.bucketSeconds > 0 && amps !== null && this.low[newest] !== null
      && Math.floor(at / this.bucketSeconds) === Math.floor(this.seconds[newest] / this.bucketSeconds);
    if (joins) {
      this.low[newest] = Math.min(this.low[newest], amps);
      this.high[newest] = Math.max(this.high[newest], amps);
    } else if (amps !== null || this.low[newest] !== null) {
      this.seconds.push(at);
      this.low.push(amps);
      this.high.push(amps);
    }
  }

  /** Joins neighbours once there are too many buckets; a gap stays a gap. */
  #halve() {
    while (this.seconds.length > BUCKETS) {
      const reach = this.seconds.at(-1) - this.seconds[0];
      this.bucketSeconds = Math.max(this.bucketSeconds * 2, (reach * 2) / BUCKETS);
      const [seconds, low, high] = [[], [], []];
      for (let index = 0; index < this.seconds.length; index++) {
        const newest = seconds.length - 1;
        const bucket = (at) => Math.floor(at / this.bucketSeconds);
        const same = newest >= 0 && bucket(this.seconds[index]) === bucket(seconds[newest]);
        if (same && this.low[index] === null && bucket(this.seconds[index + 1]) === bucket(seconds[newest])) {
          continue; // A gap shorter than a bucket cannot be drawn; the list of gaps still names it.
        }

        if (same && low[newest] !== null && this.low[index] !== null) {
          low[newest] = Math.min(low[newest], this.low[index]);
          high[newest] = Math.max(high[newest], this.high[index]);
        } else {
          seconds.push(this.seconds[index]);
          low.push(this.low[index]);
          high.push(this.high[index]);
        }
      }

      [this.seconds, this.low, this.high] = [seconds, low, high];
    }
  }
}

/**
 * The range of the current axis: what came after the switch-on, and the predicted band; the inrush has its own place,
 * and would flatten everything else.
 */
export function traceRange(trace, prediction) {
  const settle = Math.max(5, 4 * (prediction?.inrush?.settleSeconds ?? 1));
  const start = trace.seconds[0] ?? 0;
  let [low, high] = [Infinity, -Infinity];
  for (let index = 0; index < trace.seconds.length; index++) {
    const calm = trace.seconds[index] - start >= settle || trace.last - start < 3 * settle;
    if (calm && trace.low[index] !== null) {
      low = Math.min(low, trace.low[index]);
      high = Math.max(high, trace.high[index]);
    }
  }

  const band = prediction?.band;
  if (Number.isFinite(band?.lowAmps) && Number.isFinite(band?.highAmps)) {
    low = Math.min(low, band.lowAmps);
    high = Math.max(high, band.highAmps);
  }

  if (!Number.isFinite(low)) {
    return [0, 0.1];
  }

  const room = Math.max((high - low) * 0.12, high * 0.01, 1e-4);
  return [Math.max(0, low - room), high + room];
}
