/** From what was typed to what is shown: the state of the page, and everything that follows from it. */

import { answerView } from "./answer.js";
import { DETECTOR_TYPE, choicesOf, textsOf, typed } from "./bench.js";
import { say } from "./copy.js";
import { core, onTrap, start } from "./core.js";
import { byId, h, inputById, setText } from "./dom.js";
import { addNotes, controls, fill, firstChoices, labelOf, openFor, ownerOf, showAlternatives, showFaults, showUnderstood, showUse } from "./fields.js";
import { emptyHistory, recorded, undone } from "./history.js";
import { marked } from "./numbers.js";
import { load, save } from "./store.js";
import { forgetting, showTables } from "./tables.js";

/**
 * @typedef {import("./bench.js").Texts} Texts
 * @typedef {import("./door.js").Answer} Answer
 * @typedef {import("./door.js").Bench} Bench
 * @typedef {import("./door.js").Fault} Fault
 * @typedef {import("./door.js").Mark} Mark
 */

onTrap((message, fresh) => {
  const banner = byId("banner");
  banner.hidden = false;
  banner.textContent = `The calculation failed by a mistake of this program (${message}). ${fresh ? "It was started afresh" : "Reload the page to start it afresh"}; nothing you typed is lost.`;
});
start();
export const [questions, version] = [core.questions(), core.version()];
const all = controls();
addNotes(core.fields());

/** @type {{ texts: Texts, history: import("./history.js").History, question: string, mark: Mark, demo: boolean }} */
export const state = { texts: {}, history: emptyHistory(), question: questions[0]?.name ?? "", mark: "auto", demo: true, ...soundState(load("state", {})) };
/** The last good answer of each question. @type {Map<string, Answer>} */
const good = new Map();
/** What a file could not be read for. @type {string[]} */
let fileFaults = [];
/** The question for which boxes were opened last; from then on they are the person's. */
let opened = "";

/** The store can be written by any page from disk; what is not of our making is left alone. @param {any} found */
function soundState(found) {
  const ours = typeof found?.texts === "object" && found.texts !== null && Array.isArray(found.history?.past) && Array.isArray(found.history?.future);
  return ours && Object.values(found.texts).every((text) => typeof text === "string") ? found : {};
}

/** The last good answer of the question that is asked. */
export const goodAnswer = () => good.get(state.question);

/** The bench as it stands, in numbers, with what is wrong in it. */
export const understoodBench = () => core.understand(typed(all, state.texts), state.mark);

/** @param {string[]} sentences what a file could not be read for; the next change takes them away */
export function sayFileFaults(sentences) {
  fileFaults = sentences;
  update();
}

/** Everything on the page follows from the texts. */
export function update() {
  const { texts, mark } = state;
  fill(texts);
  showAlternatives(texts);
  const question = questions.find(({ name }) => name === state.question) ?? questions[0];
  if (!question) return;
  const { understood, tables, faults, blocking, answer } = core.follow(question.name, typed(all, texts), mark);
  showUnderstood(texts, understood);
  showTables(texts, tables, changeChoices);
  showUse(question.fields);
  if (question.name !== opened) openFor((opened = question.name));
  if (answer) {
    good.set(question.name, answer);
    byId("banner").hidden = true;
  }
  showSummary(showFaults(faults, all, texts));
  showAnswer(question.name, blocking);
  showTools();
  save("state", state);
}

/** @param {string} question @param {Fault[]} faults */
function showAnswer(question, faults) {
  const found = good.get(question);
  const answer = byId("answer");
  answer.replaceChildren(...(found ? answerView(found, state.mark) : []));
  const stale = faults.length > 0;
  answer.classList.toggle("stale", stale);
  const line = byId("state-line");
  line.hidden = !stale;
  const owners = [...new Set(faults.map(({ pointer }) => ownerOf(pointer, all, state.texts)?.name ?? pointer))];
  const says = found ? "This is the last good answer. It waits for: " : "To answer, the bench still needs: ";
  if (stale) line.replaceChildren(says, ...joinedBy(faultLinks(faults, owners), ", "), ".");
  for (const id of ["keep", "onto-bench"]) {
    const button = /** @type {HTMLButtonElement | null} */ (document.getElementById(id));
    if (button) button.disabled = stale;
  }
  const mini = byId("mini");
  mini.hidden = !found;
  setText(mini, found ? `${stale ? "Waiting; last: " : ""}${marked(found.shown.headline.figure, state.mark)}` : "");
}

/** @param {Fault[]} faults @param {string[]} names */
function faultLinks(faults, names) {
  return names.map((name) => {
    const fault = faults.find(({ pointer }) => (ownerOf(pointer, all, state.texts)?.name ?? pointer) === name);
    const focus = () => {
      const owner = fault && ownerOf(fault.pointer, all, state.texts);
      const target = owner?.input ?? owner?.place.closest("[data-part]")?.querySelector("input, select, textarea");
      /** @type {HTMLElement | null | undefined} */ (target)?.focus();
    };
    return h("button", { type: "button", class: "link", click: focus }, name);
  });
}

/** @param {Node[]} nodes @param {string} between @returns {(Node | string)[]} */
const joinedBy = (nodes, between) => nodes.flatMap((node, i) => (i === 0 ? [node] : [between, node]));

/** What no field owns stands above the bench. @param {Fault[]} homeless */
function showSummary(homeless) {
  const sentences = [...fileFaults, ...homeless.map(({ sentence, pointer }) => (pointer ? `${pointer}: ${sentence}` : sentence))];
  const summary = byId("summary");
  summary.hidden = sentences.length === 0;
  summary.replaceChildren(...sentences.map((sentence) => h("p", {}, sentence)));
}

function showTools() {
  const [undo, redo] = [inputById("undo"), inputById("redo")];
  undo.disabled = state.history.past.length === 0;
  redo.disabled = state.history.future.length === 0;
  undo.title = state.history.past.at(-1)?.name ?? "";
  redo.title = state.history.future[0]?.name ?? "";
  byId("demo").hidden = !state.demo;
}

/** @param {Texts} texts @param {string | null} open the field being typed in @param {string} [name] of the step */
export function change(texts, open, name) {
  const named = (/** @type {import("./history.js").Changes} */ changes) => name ?? stepName(changes);
  fileFaults = [];
  state.history = recorded(state.history, state.texts, texts, named, open);
  state.texts = texts;
  update();
}

/** @param {import("./history.js").Changes} changes */
function stepName(changes) {
  const [[field, [before, after]] = ["", ["", ""]], ...others] = Object.entries(changes);
  const short = (/** @type {string} */ text) => (text.length > 24 || text.includes("\n") ? "…" : text || "empty");
  const step = field.includes("#") ? `${labelOf(field.split("#")[0] ?? "")}: how it is read` : `${labelOf(field)} ${short(before)} → ${short(after)}`;
  return others.length > 0 ? `${step} and ${others.length} more` : step;
}

/** @param {string} name @param {Record<string, unknown> | null} choices */
function changeChoices(name, choices) {
  const others = forgetting(state.texts, name);
  change(choices ? { ...others, [choicesOf(name)]: JSON.stringify(choices) } : others, null);
}

/** Puts a bench into the form. @param {Bench} bench @param {string} name of the step */
export function put(bench, name) {
  const write = {
    number: (/** @type {string} */ pointer, /** @type {number} */ value) => core.write_number(pointer, value, state.mark),
    table: (/** @type {string} */ pointer) => core.write_table(pointer, bench, state.mark).value ?? "",
  };
  change({ ...firstChoices(), ...textsOf(all, bench, write, firstChoices()) }, null, name);
}

/** Puts what an answer found onto the bench, as one step. @param {import("./door.js").OntoBench} onto */
export function putOnto({ name, values }) {
  const text = (/** @type {string} */ pointer, /** @type {number | string} */ value) =>
    typeof value === "number" ? core.write_number(pointer, value, state.mark) : value;
  const avalanche = values.some(({ pointer }) => pointer.startsWith("/detector/avalanche/"));
  const found = Object.fromEntries(values.map(({ pointer, value }) => [pointer, text(pointer, value)]));
  change({ ...state.texts, ...found, ...(avalanche && { [DETECTOR_TYPE]: "avalanche" }) }, null, name);
  say("On the bench; undo takes it back");
}

/** @param {typeof undone} step @param {string} says */
export function walk(step, says) {
  const to = step(state.history, state.texts);
  if (!to) return;
  state.history = to.history;
  state.texts = to.texts;
  update();
  say(`${says}: ${to.step.name}`);
}
