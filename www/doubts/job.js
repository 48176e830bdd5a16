/** The trials of a question, in the worker. */

/** @typedef {import("../worker.js").Progress} Progress */

/** A slice takes about so long, so that progress is seen and cancelling is felt, ms. */
const SLICE = 60;

/**
 * The trials of a question.
 *
 * @param {{ question: string, bench: object }} payload
 * @param {any} door
 * @returns {Generator<Progress, unknown>} the answer with its trials, or faults
 */
export function* trials({ question, bench }, door) {
  const { value: run, faults } = door.Run.begin(question, bench, { trials: true });
  if (!run) return { faults };
  let slice = 500;
  while (!run.done()) {
    const began = performance.now();
    run.advance(slice);
    const took = Math.max(performance.now() - began, 1);
    slice = Math.max(1, Math.round(slice * Math.min(4, SLICE / took)));
    yield { share: 0, count: run.count() };
  }
  return run.finish();
}
