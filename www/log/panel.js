/** The place for a log of readings: opening, progress, what was understood, what came of it, saving. */

import { say } from "../copy.js";
import { byId, h, setText } from "../dom.js";
import { opensFile, save, takesDroppedFile } from "../files.js";
import { afterUpdate, state, understoodBench } from "../live.js";
import { redraw } from "../tables.js";
import { startWork } from "../work.js";
import { count, logView, understoodView } from "./view.js";

/**
 * @typedef {import("../door.js").LogOutcome} LogOutcome
 * @typedef {import("./view.js").Choices} Choices
 */

/** What stands here: the file, how it is to be read, and what was read of which bench. @type {{ file: File | null, choices: Choices, outcome: LogOutcome | null, bench: string }} */
const log = { file: null, choices: {}, outcome: null, bench: "" };

/** @type {{ cancel(): void } | null} */
let job = null;

/** Quarters are spoken only where the work lasts: between two of them at least this many ms. */
const BETWEEN_WORDS = 5000;

/** Everything on the bench that a corrected power depends on, as it was typed. */
const benchKey = () => {
  const counts = (/** @type {[string, string]} */ [name]) => /^\/(source|meter|detector\/responsivity)\b/.test(name) && name !== "/meter/reading_dbm";
  return JSON.stringify(Object.entries(state.texts).filter(counts));
};

/** Wires the place. */
export function startLog() {
  opensFile(byId("log-open"), "log-file", open);
  takesDroppedFile(byId("log"), open);
  byId("log-cancel").addEventListener("click", cancel);
  byId("log-again").addEventListener("click", read);
  afterUpdate(show);
}

/** @param {File} file */
function open(file) {
  Object.assign(log, { file, choices: {}, outcome: null });
  show();
  read();
}

/** Reads the file as it is to be read, on the bench as it is now. */
function read() {
  const bench = benchKey();
  work({}, (outcome) => {
    Object.assign(log, { outcome, bench });
    const { value } = outcome;
    say(value ? `${log.file?.name} read: ${count(value.counts.rows)} rows` : `${log.file?.name} needs a choice before it can be read`);
    show();
  });
}

function saveCorrected() {
  const corrected = state.mark === "auto" ? {} : { decimal_mark: state.mark };
  work({ corrected }, (_, written) => {
    save(`${(log.file?.name ?? "log").replace(/\.[^.]*$/, "")}.corrected.csv`, "text/csv", new Blob(written));
    say("Saved the corrected log");
  });
}

/** @param {Record<string, unknown>} more options @param {(outcome: LogOutcome, written: Blob[]) => void} use */
function work(more, use) {
  const { file } = log;
  if (!file) return;
  job?.cancel();
  const options = { choices: log.choices, bench: understoodBench().bench, ...more };
  /** Blobs, so that an engine may keep them on its disk. @type {Blob[]} */
  const written = [];
  let spoken = performance.now();
  progress(0, 0);
  say(`Reading ${file.name}`);
  job = startWork("log", { size: file.size, options }, {
    progress: ({ share, count: rows }) => {
      progress(share, rows);
      if (performance.now() - spoken < BETWEEN_WORDS) return;
      spoken = performance.now();
      say(`${Math.round(100 * share)} % read`);
    },
    answer: async (asked) => {
      if ("from" in asked) return file.slice(asked.from, asked.to).arrayBuffer();
      written.push(new Blob([asked.written]));
      return undefined;
    },
    done: (outcome) => {
      ended();
      use(outcome, written);
    },
    failed: (message) => {
      ended();
      tell(`${file.name} could not be read (${message}). If the file was moved or changed meanwhile, open it again.`);
    },
  });
}

/** @param {number} share @param {number} rows */
function progress(share, rows) {
  byId("log-progress").hidden = false;
  /** @type {HTMLProgressElement} */ (byId("log-bar")).value = share;
  setText(byId("log-rows"), `${log.file?.name}: ${count(rows)} rows so far, ${Math.round(100 * share)} %`);
  byId("log-view").classList.toggle("stale", log.outcome !== null);
  tell("");
}

function ended() {
  const focused = byId("log-progress").contains(document.activeElement);
  job = null;
  byId("log-progress").hidden = true;
  byId("log-view").classList.remove("stale");
  // The focus must not fall out of the page with the button that had it.
  if (focused) byId("log").focus();
}

function cancel() {
  job?.cancel();
  ended();
  tell(`${log.file?.name} was not read to its end.`);
  say("Cancelled");
}

/** @param {string} sentence */
function tell(sentence) {
  byId("log-told").hidden = sentence === "";
  setText(byId("log-told"), sentence);
}

/** @type {{ outcome: LogOutcome | null, mark: string }} */
let drawn = { outcome: null, mark: "" };

/** Shows what is there; what has not changed is not drawn anew. */
function show() {
  const { outcome, choices } = log;
  byId("log-changed").hidden = !outcome || log.bench === benchKey();
  if (drawn.outcome === outcome && drawn.mark === state.mark) return;
  drawn = { outcome, mark: state.mark };
  const change = (/** @type {Choices | null} */ to) => {
    log.choices = to ?? {};
    read();
  };
  const view = outcome ? [h("h4", {}, log.file?.name ?? ""), understoodView(outcome, choices, change), ...(outcome.value ? logView(outcome.value, state.mark, saveCorrected) : [])] : [];
  redraw(byId("log-view"), view);
}
