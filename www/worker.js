/** The worker: long work, slice by slice, out of the page's way. It is a script of its own and never touches the page. */

import { trials } from "./doubts/job.js";
import { log } from "./log/job.js";

/**
 * What has been done so far, and whatever else a job hands over as it goes.
 *
 * @typedef {{ share: number, count: number } & Record<string, unknown>} Progress share of the whole, 0 to 1
 *
 * Something for the page to do or to fetch; the promise gives its answer. Files are read there, because not every engine
 * lets the worker of a page from disk read them.
 * @typedef {(asked: unknown, transfer?: Transferable[]) => Promise<any>} Ask
 *
 * A job yields after each slice of its work, and returns its outcome.
 * @typedef {(payload: any, door: any, ask: Ask) => Generator<Progress, unknown> | AsyncGenerator<Progress, unknown>} Job
 *
 * @typedef {{ progress: Progress } | { asked: unknown } | { done: unknown } | { failed: string }} Message
 * @typedef {{ core: WebAssembly.Module | BufferSource, name: string, payload: unknown }} Order
 */

/** Every kind of work that is done here. @type {Record<string, Job>} */
export const JOBS = { log, trials };

/** More often than this a person cannot see it, and a screen reader could not say it, ms. */
const BETWEEN_REPORTS = 100;

/**
 * Does one job to its end.
 *
 * @param {Job | undefined} job
 * @param {unknown} payload
 * @param {() => unknown} door starts the core and gives it
 * @param {(message: Message) => void} post
 * @param {Ask} ask
 */
export async function perform(job, payload, door, post, ask) {
  try {
    if (!job) throw new Error("no such work is known");
    const slices = job(payload, door(), ask);
    let told = -Infinity;
    for (;;) {
      const { done, value } = await slices.next();
      if (done) return post({ done: value });
      const now = performance.now();
      if (now - told < BETWEEN_REPORTS) continue;
      told = now;
      post({ progress: /** @type {Progress} */ (value) });
    }
  } catch (error) {
    post({ failed: error instanceof Error ? error.message : String(error) });
  }
}

// In a worker only: the page's tests import this file too.
if ("WorkerGlobalScope" in globalThis) {
  const scope = /** @type {any} */ (globalThis);
  /** Whoever waits for the page, in the order of asking. @type {((answer: unknown) => void)[]} */
  const waiting = [];
  /** @type {Ask} */
  const ask = (asked, transfer = []) =>
    new Promise((answered) => {
      waiting.push(answered);
      scope.postMessage({ asked }, transfer);
    });
  scope.onmessage = (/** @type {MessageEvent<Order | { answer: unknown }>} */ { data }) => {
    if ("answer" in data) return waiting.shift()?.(data.answer);
    const { core, name, payload } = data;
    const door = () => {
      scope.wasm_bindgen.initSync({ module: core });
      return scope.wasm_bindgen;
    };
    const job = Object.hasOwn(JOBS, name) ? JOBS[name] : undefined;
    perform(job, payload, door, (message) => scope.postMessage(message), ask);
  };
}
