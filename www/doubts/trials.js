/** A run of trials: started, watched, cancelled, and its result kept for as long as the bench stays the same. */

import { say } from "../copy.js";
import { byId, h, inputById, setText } from "../dom.js";
import { doubtsOf } from "./text.js";
import { startWork } from "../work.js";

/**
 * @typedef {import("../door.js").Answer} Answer
 * @typedef {import("../door.js").Bench} Bench
 * @typedef {import("../bench.js").Texts} Texts
 */

/** The run that is under way. @type {{ cancel(): void } | null} */
let running = null;
/** The last result, and the state of the page that it belongs to. @type {{ key: string, answer: Answer } | null} */
let checked = null;
/** Why the last run gave nothing. */
let wrong = "";

/** What a result depends on. @param {string} question @param {Texts} texts */
const keyOf = (question, texts) => JSON.stringify([question, texts]);

/** The answer with its trials, when they were run on just this. @param {string} question @param {Texts} texts */
export const checkedAnswer = (question, texts) => (checked?.key === keyOf(question, texts) ? checked.answer : null);

/** @param {string} question @param {Texts} texts @param {() => Bench} bench @param {() => void} show */
export function run(question, texts, bench, show) {
  if (running) return;
  const key = keyOf(question, texts);
  const total = Number(doubtsOf(texts).monte_carlo.trials.replace(/\s/g, "")) || 1e6;
  wrong = "";
  progress(0, total);
  running = startWork("trials", { question, bench: bench() }, {
    progress: ({ count }) => progress(count, total),
    done: ({ answer, uncertainty, faults }) => {
      running = null;
      if (answer && uncertainty?.monte_carlo) checked = { key, answer };
      wrong = faults ? faults.map((/** @type {{ sentence: string }} */ { sentence }) => sentence).join(" ") : uncertainty?.monte_carlo ? "" : "No trial gave a value.";
      say(wrong || "The trials are done");
      show();
    },
    failed: (message) => {
      running = null;
      wrong = `The trials failed by a mistake of this program (${message}).`;
      say(wrong);
      show();
    },
  });
  show();
}

/** @param {() => void} show */
export function cancel(show) {
  running?.cancel();
  running = null;
  say("The trials are cancelled");
  show();
  byId("trials-run").focus();
}

/** @param {number} count @param {number} total */
function progress(count, total) {
  const bar = /** @type {HTMLProgressElement} */ (byId("trials-progress"));
  bar.max = total;
  bar.value = count;
  setText(byId("trials-count"), `${count.toLocaleString("en").replaceAll(",", "\u202f")} trials`);
}

/** @param {string} question @param {Texts} texts @param {boolean} possible whether there is a budget to be checked */
export function showTrials(question, texts, possible) {
  const { trials, seed, adaptive } = doubtsOf(texts).monte_carlo;
  const fill = (/** @type {string} */ id, /** @type {string} */ text) => {
    const input = inputById(id);
    if (input.value !== text) input.value = text;
  };
  fill("trials-trials", trials);
  fill("trials-seed", seed);
  inputById("trials-adaptive").checked = adaptive;
  inputById("trials-run").disabled = !possible || running !== null;
  byId("trials-running").hidden = running === null;
  const stale = checked && checked.key !== keyOf(question, texts);
  const said = wrong || (stale ? "The last trials were of another bench; run them again." : checked ? "The answer above has these trials in it." : "");
  byId("trials-said").replaceChildren(...(said ? [h("span", { class: wrong ? "wrong" : "" }, said)] : []));
}
