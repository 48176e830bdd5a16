/** Long work, done in a worker that the page makes of its own texts; here is the page's side of it. */

import { coreBytes, coreModule } from "./core.js";

/**
 * @typedef {import("./worker.js").Message} Message
 * @typedef {import("./worker.js").Order} Order
 * @typedef {import("./worker.js").Progress} Progress
 *
 * @typedef {object} Listeners
 * @property {(progress: Progress) => void} [progress] a few times a second
 * @property {(outcome: any) => void} done
 * @property {(message: string) => void} failed a mistake of ours, in words of the engine
 */

/**
 * Starts a job. Each has a worker of its own, which ends with it: the memory that it took is given back, and a core that
 * has trapped is never used again. Exactly one of `done` and `failed` is called, unless the job is cancelled first.
 *
 * @param {string} name one of the worker's jobs
 * @param {unknown} payload whatever the job takes; files go as they are, without being copied
 * @param {Listeners} listeners
 * @returns {{ cancel(): void }} after which nothing is called any more
 */
export function startWork(name, payload, { progress, done, failed }) {
  const text = (/** @type {string} */ id) => document.getElementById(id)?.textContent ?? "";
  const url = URL.createObjectURL(new Blob([text("glue"), "\n", text("worker")], { type: "text/javascript" }));
  /** @type {Worker | null} */
  let worker = null;
  let over = false;
  const end = () => {
    over = true;
    worker?.terminate();
    URL.revokeObjectURL(url);
  };
  const fail = (/** @type {string} */ message) => {
    if (over) return;
    end();
    failed(message);
  };
  try {
    worker = new Worker(url);
    worker.onmessage = (/** @type {MessageEvent<Message>} */ { data }) => {
      // What was on its way when the job was cancelled.
      if (over) return;
      if ("progress" in data) return progress?.(data.progress);
      if ("failed" in data) return fail(data.failed);
      end();
      done(data.done);
    };
    worker.onerror = (event) => {
      event.preventDefault();
      fail(event.message || "the worker could not be started");
    };
    worker.onmessageerror = () => fail("what the worker sent could not be read");
    order(worker, name, payload);
  } catch (error) {
    // Later, so that the caller holds what this function returns.
    queueMicrotask(() => fail(error instanceof Error ? error.message : String(error)));
  }
  return { cancel: end };
}

/** The compiled core is shared; an engine that cannot hand it over compiles it again. @param {Worker} worker @param {string} name @param {unknown} payload */
function order(worker, name, payload) {
  const module = coreModule();
  if (module) {
    try {
      worker.postMessage(/** @type {Order} */ ({ core: module, name, payload }));
      return;
    } catch (error) {
      if (!(error instanceof DOMException && error.name === "DataCloneError")) throw error;
    }
  }
  worker.postMessage(/** @type {Order} */ ({ core: coreBytes(), name, payload }));
}
