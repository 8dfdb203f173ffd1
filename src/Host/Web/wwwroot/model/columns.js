// Answers of the host as columns for a plot: seconds, then least and greatest of each run.

/**
 * One run's columns as they are; two runs on one ascending column of seconds. Where one run has a bucket and the other
 * none, the other is left undefined, which a plot takes for nothing, while null is a gap.
 */
export function columnsOf(answers) {
  if (answers.length === 1) {
    return [answers[0].seconds, answers[0].lowAmps, answers[0].highAmps];
  }

  const rows = new Map();
  answers.forEach((answer, index) => answer.seconds.forEach((at, place) => {
    const row = rows.get(at) ?? rows.set(at, new Array(2 * answers.length).fill(undefined)).get(at);
    row[2 * index] = answer.lowAmps[place];
    row[2 * index + 1] = answer.highAmps[place];
  }));
  const seconds = [...rows.keys()].sort((a, b) => a - b);
  return [seconds, ...Array.from({ length: 2 * answers.length }, (_, column) => seconds.map((at) => rows.get(at)[column]))];
}

/** The range of the current axis for what a window shows; the switch-on counts only where one looks at it. */
export function rangeOf([seconds, ...columns], { from, to }) {
  const inside = [];
  for (let index = 0; index < seconds.length; index++) {
    if (seconds[index] >= from && seconds[index] <= to) {
      inside.push(index);
    }
  }

  const skip = inside.length > 20 && seconds[inside[0]] <= 0.5 && to - from > 60 ? 1 : 0;
  let [low, high] = [Infinity, -Infinity];
  for (const index of inside.slice(skip)) {
    for (const column of columns) {
      const value = column[index];
      if (value !== null && value !== undefined) {
        low = Math.min(low, value);
        high = Math.max(high, value);
      }
    }
  }

  if (low > high) {
    return null;
  }

  const room = Math.max((high - low) * 0.12, high * 0.02, 1e-4);
  return [Math.max(0, low - room), high + room];
}

/** The bucket of an answer that an instant falls in. */
export function valueAt({ seconds, lowAmps, highAmps }, at) {
  let [first, last] = [0, seconds.length - 1];
  if (last < 0 || at < seconds[0]) {
    return null;
  }

  while (first < last) {
    const middle = Math.ceil((first + last) / 2);
    if (seconds[middle] <= at) {
      first = middle;
    } else {
      last = middle - 1;
    }
  }

  return { seconds: seconds[first], low: lowAmps[first], high: highAmps[first] };
}
