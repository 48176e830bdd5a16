/** The worker: long work, slice by slice, out of the page's way. It is a script of its own and never touches the page. */

/**
 * What has been done so far, and whatever else a job hands over as it goes.
 *
 * @typedef {{ share: number, count: number } & Record<string, unknown>} Progress share of the whole, 0 to 1
 *
 * A job yields after each slice of its work, and returns its outcome.
 * @typedef {(payload: any, door: any) => Generator<Progress, unknown> | AsyncGenerator<Progress, unknown>} Job
 *
 * @typedef {{ progress: Progress } | { done: unknown } | { failed: string }} Message
 * @typedef {{ core: WebAssembly.Module | BufferSource, name: string, payload: unknown }} Order
 */

/** Every kind of work that is done here. @type {Record<string, Job>} */
export const JOBS = {};

/** More often than this a person cannot see it, and a screen reader could not say it, ms. */
const BETWEEN_REPORTS = 100;

/**
 * Does one job to its end.
 *
 * @param {Job | undefined} job
 * @param {unknown} payload
 * @param {() => unknown} door starts the core and gives it
 * @param {(message: Message) => void} post
 */
export async function perform(job, payload, door, post) {
  try {
    if (!job) throw new Error("no such work is known");
    const slices = job(payload, door());
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
  scope.onmessage = (/** @type {MessageEvent<Order>} */ { data: { core, name, payload } }) => {
    const door = () => {
      scope.wasm_bindgen.initSync({ module: core });
      return scope.wasm_bindgen;
    };
    const job = Object.hasOwn(JOBS, name) ? JOBS[name] : undefined;
    perform(job, payload, door, (message) => scope.postMessage(message));
  };
}
