// The host's HTTP interface. A refusal becomes an ApiProblem that says what and what to do.

export class ApiProblem extends Error {
  constructor(status, problem) {
    super(problem.detail ?? problem.title ?? `The host answered ${status}.`);
    this.status = status;
    Object.assign(this, { title: problem.title, detail: problem.detail, input: problem.input, position: problem.position });
  }
}

const lockedOut = new Set();

/** Calls back when the host wants a token. */
export const onLocked = (callback) => lockedOut.add(callback);

async function ask(method, path, body, signal) {
  let answer;
  try {
    answer = await fetch(path, {
      method,
      signal,
      headers: body === undefined ? {} : { "content-type": "application/json" },
      body: body === undefined ? undefined : JSON.stringify(body),
    });
  } catch (error) {
    if (error.name === "AbortError") {
      throw error;
    }

    throw new ApiProblem(0, { title: "The host does not answer", detail: "Is Lampwarden still running? Look at the bench itself." });
  }

  if (answer.ok) {
    // 202 and 204 have nothing to say.
    const said = await answer.text();
    return said === "" ? null : JSON.parse(said);
  }

  const problem = await answer.json().catch(() => ({}));
  if (answer.status === 401 && path !== "/api/session") {
    lockedOut.forEach((callback) => callback());
  }

  throw new ApiProblem(answer.status, problem);
}

/** A query string of what is neither null nor empty. */
export function query(values) {
  const given = Object.entries(values).filter(([, value]) => value !== null && value !== undefined && value !== "");
  return given.length === 0 ? "" : "?" + new URLSearchParams(given).toString();
}

export const get = (path, signal) => ask("GET", path, undefined, signal);
export const post = (path, body = {}) => ask("POST", path, body);
export const benchPath = (bench, rest = "") => `/api/benches/${encodeURIComponent(bench)}${rest}`;
export const runPath = (run, rest = "") => `/api/runs/${encodeURIComponent(run)}${rest}`;
