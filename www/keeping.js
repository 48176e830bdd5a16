/** Keeping answers: what the buttons of the notebook do. */

import { ofAreas } from "./bench.js";
import { say } from "./copy.js";
import { byId, inputById } from "./dom.js";
import { labelOf } from "./fields.js";
import { asksOf, change, goodAnswer, state, understoodBench, version } from "./live.js";
import * as notebook from "./notebook.js";
import { notebookView } from "./notebook-view.js";
import { load, onForeignChange, save } from "./store.js";

/** @typedef {import("./notebook.js").Kept} Kept */

/** @type {Kept[]} */
let kept = notebook.sound(load("notebook", []));
/** Ids of the answers to compare. @type {string[]} */
let chosen = [];
/** @type {Kept | null} */
let removed = null;
/** What is to be done when a kept answer is put back: its question was chosen. */
let reopened = () => {};

/** @param {() => void} listener called before the bench of a kept answer is put back */
export function onReopen(listener) {
  reopened = listener;
}

onForeignChange("notebook", () => {
  kept = notebook.sound(load("notebook", []));
  showNotebook();
});

/** The text of a notebook file. */
export const notebookText = () => notebook.fileText(kept, version);

/** @param {Kept[]} more */
export const take = (more) => setKept(notebook.joined(kept, more));

/** An answer is kept with the bench and with its own job's texts, and nothing of other jobs or persons. @param {string} question */
const belongsTo = (question) => (/** @type {string} */ area) => area === "" || area === question;

export function keep() {
  const answer = goodAnswer();
  if (!answer) return;
  const { bench } = understoodBench();
  const asks = asksOf(state.question);
  const when = new Date().toISOString();
  const id = `${when}-${Math.random().toString(36).slice(2, 8)}`;
  setKept([{ id, when, question: state.question, asks, title: state.texts["/title"] ?? "", note: "", version, texts: ofAreas(state.texts, belongsTo(state.question)), bench, answer }, ...kept]);
  say("Kept in the notebook");
}

/** @param {Kept[]} entries */
function setKept(entries) {
  kept = entries;
  chosen = chosen.filter((id) => entries.some((entry) => entry.id === id));
  if (!save("notebook", kept)) say("This browser keeps nothing: save the notebook to a file");
  showNotebook();
}

export function showNotebook() {
  byId("entries").replaceChildren(...notebookView(kept, chosen, removed !== null, state.mark, deeds, labelOf));
  inputById("notebook-save").disabled = kept.length === 0;
}

/** @type {import("./notebook-view.js").Deeds} */
const deeds = {
  reopen(entry) {
    state.question = entry.question;
    reopened();
    const others = ofAreas(state.texts, (area) => !belongsTo(entry.question)(area));
    change({ ...others, ...entry.texts }, null, `Reopened ${entry.title || "a bench"}`);
    say("The bench of this answer is back on the bench; undo brings yours back");
  },
  remove(entry) {
    removed = entry;
    setKept(kept.filter(({ id }) => id !== entry.id));
    document.getElementById("restore")?.focus();
  },
  restore() {
    const back = removed ? [removed] : [];
    removed = null;
    setKept(notebook.joined(kept, back));
  },
  note(entry, note) {
    setKept(kept.map((one) => (one.id === entry.id ? { ...one, note } : one)));
  },
  compare(entry, on) {
    chosen = on ? [...chosen, entry.id] : chosen.filter((id) => id !== entry.id);
    showNotebook();
  },
};
