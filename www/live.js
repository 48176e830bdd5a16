/** From what was typed to what is shown: the state of the page, and everything that follows from it. */

import { answerView } from "./answer.js";
import { DETECTOR_TYPE, choicesOf, ofAreas, takesPart, textsOf, typed } from "./bench.js";
import { say } from "./copy.js";
import { core, onTrap, start } from "./core.js";
import { byId, h, inputById, setText } from "./dom.js";
import { DOUBTS, doubtsOf, instead, shortly, withDoubts } from "./doubts/text.js";
import { showDoubts, showOffers } from "./doubts/view.js";
import { addNotes, controls, fill, firstChoices, form, labelOf, openFor, ownerOf, showAlternatives, showDoubtful, showFaults, showUnderstood, showUse, under } from "./fields.js";
import { emptyHistory, recorded, undone } from "./history.js";
import { marked } from "./numbers.js";
import { load, save } from "./store.js";
import { forgetting, showTables } from "./tables.js";
import { checkedAnswer, showTrials } from "./doubts/trials.js";

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
const fields = core.fields();
addNotes(fields);
const usual = core.usual_doubts();

/** @type {{ texts: Texts, history: import("./history.js").History, question: string, mark: Mark, demo: boolean }} */
export const state = { texts: {}, history: emptyHistory(), question: questions[0]?.name ?? "", mark: "auto", demo: true, ...soundState(load("state", {})) };
/**
 * What can be done in the place of a question, with texts of its own: `follow` makes an answer of them, or says what it waits for.
 *
 * @typedef {{ name: string, focus: () => void }} Wait
 * @typedef {{ asks: string, panel: HTMLElement, follow(): { answer: Answer | null, waits: Wait[] }, deeds(): HTMLElement[] }} Job
 * @type {Map<string, Job>}
 */
export const jobs = new Map();
/** What the one asked asks. */
export const asksOf = (/** @type {string} */ name) => questions.find((question) => question.name === name)?.asks ?? jobs.get(name)?.asks ?? name;
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

/** What else follows. @type {(() => void)[]} */
const followers = [];

/** @param {() => void} follower called after each update */
export function afterUpdate(follower) {
  followers.push(follower);
}

/** Everything on the page follows from the texts. */
export function update() {
  const { texts, mark } = state;
  fill(texts);
  showAlternatives(texts);
  const job = jobs.get(state.question);
  for (const [name, { panel }] of jobs) panel.hidden = name !== state.question;
  const question = questions.find(({ name }) => name === state.question) ?? questions[0];
  if (!question) return;
  const bench = typed(all, texts);
  const { understood, tables, faults, ...rest } = job ? core.understand(bench, mark) : core.follow(question.name, bench, mark);
  showUnderstood(texts, understood);
  showTables(form(), texts, tables, changeChoices);
  showUse(job ? [] : question.fields);
  if (question.name !== opened) openFor((opened = question.name));
  const ofDoubts = faults.filter(({ pointer }) => under(pointer, DOUBTS));
  showSummary(showFaults(faults.filter((fault) => !ofDoubts.includes(fault)), all, texts));
  showDoubts({ texts, question, numbers: numbersOf(question), usual, faults: ofDoubts, understood, change });
  showOffers();
  const doubts = doubtsOf(texts);
  showDoubtful((pointer) => shortly(doubts, pointer));
  const name = job ? state.question : question.name;
  const { answer, waits } = job?.follow() ?? asked("blocking" in rest ? rest : { answer: null, blocking: [] }, name);
  if (answer) {
    good.set(name, answer);
    byId("banner").hidden = true;
  }
  if ("uncertainty" in rest) showTrials(name, texts, !!rest.uncertainty);
  showAnswer(name, waits);
  showTools();
  for (const part of /** @type {NodeListOf<HTMLElement>} */ (document.querySelectorAll("[data-question]"))) part.hidden = part.dataset.question !== name;
  for (const follow of followers) follow();
  save("state", state);
}

/** A question's answer, checked by trials where that was done, and what it waits for. @param {{ answer: Answer | null, blocking: Fault[] }} followed @param {string} name */
const asked = ({ answer, blocking }, name) => ({ answer: answer && (checkedAnswer(name, state.texts) ?? answer), waits: waitsOf(blocking) });

/** The numbers of a question that stand on the bench now. @param {import("./door.js").Question} question */
function numbersOf(question) {
  const known = new Set(fields.map(({ pointer }) => pointer));
  const here = all.filter((control) => known.has(control.name) && takesPart(control, state.texts) && question.fields.some((field) => under(control.name, field)));
  return here.map(({ name }) => ({ pointer: name, label: labelOf(name) }));
}

/** @param {string} name @param {Wait[]} waits */
function showAnswer(name, waits) {
  const found = good.get(name);
  const answer = byId("answer");
  const [head, ...rest] = found ? answerView(found, state.mark) : [];
  byId("answer-head").replaceChildren(...(head ? [head] : []));
  byId("answer-rest").replaceChildren(...rest);
  byId("doubts").hidden = !found || jobs.has(name) || questions.every((one) => one.name !== name || one.uncertain.length === 0);
  const stale = waits.length > 0;
  answer.classList.toggle("stale", stale);
  const line = byId("state-line");
  line.hidden = !stale;
  const links = waits.map(({ name: says, focus }) => h("button", { type: "button", class: "link", click: focus }, says));
  const says = found ? "This is the last good answer. It waits for: " : `To answer, ${jobs.has(name) ? "there is" : "the bench"} still need${jobs.has(name) ? "ed" : "s"}: `;
  if (stale) line.replaceChildren(says, ...joinedBy(links, ", "), ".");
  const deeds = jobs.get(name)?.deeds() ?? [];
  answer.querySelector(".actions")?.prepend(...deeds);
  // One thing is the main one.
  if (deeds.length > 0) document.getElementById("keep")?.classList.remove("main");
  for (const button of /** @type {NodeListOf<HTMLButtonElement>} */ (answer.querySelectorAll("#keep, #onto-bench, [data-deed]"))) button.disabled = stale;
  const mini = byId("mini");
  mini.hidden = !found;
  setText(mini, found ? `${stale ? "Waiting; last: " : ""}${marked(found.shown.headline.figure, state.mark)}` : "");
}

/** What stands between a question and its answer, each field once. @param {Fault[]} faults @returns {Wait[]} */
function waitsOf(faults) {
  /** @type {Map<string, Wait>} */
  const waits = new Map();
  for (const { pointer } of faults) {
    const owner = ownerOf(pointer, all, state.texts);
    const name = owner?.name ?? pointer;
    const focus = () => {
      const target = owner?.input ?? owner?.place.closest("[data-part]")?.querySelector("input, select, textarea");
      /** @type {HTMLElement | null | undefined} */ (target)?.focus();
    };
    if (!waits.has(name)) waits.set(name, { name, focus });
  }
  return [...waits.values()];
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

/** How a table is to be read. @param {string} name @param {Record<string, unknown> | null} choices */
export function changeChoices(name, choices) {
  const others = forgetting(state.texts, name);
  change(choices ? { ...others, [choicesOf(name)]: JSON.stringify(choices) } : others, null);
}

/** What was typed elsewhere than on the bench, and stays when another bench is put there. */
export const besideBench = () => ofAreas(state.texts, (area) => area !== "");

/** Puts a bench into the form. @param {Bench} bench @param {string} name of the step */
export function put(bench, name) {
  const write = {
    number: (/** @type {string} */ pointer, /** @type {number} */ value) => core.write_number(pointer, value, state.mark),
    table: (/** @type {string} */ pointer) => core.write_table(pointer, bench, state.mark).value ?? "",
    doubts: () => core.write_doubts(bench, state.mark).value ?? null,
  };
  change({ ...besideBench(), ...firstChoices(), ...textsOf(all, bench, write, firstChoices()) }, null, name);
}

/** Puts a certificate on the bench as if it were typed, and leaves the rest. @param {import("./door.js").Certificate} certificate @param {string} name of the step */
export function putCertificate(certificate, name) {
  const at = "/meter/certificate";
  const points = core.write_table(at, { meter: { certificate } }, state.mark).value ?? "";
  const k = certificate.coverage_factor;
  const factor = k ? core.write_number(`${at}/coverage_factor`, k, state.mark) : "";
  // The form stands in the table's header; correlation and scale were said of the other certificate.
  const texts = { [`${at}/points`]: points, [`${at}/coverage_factor`]: factor, [`${at}/form`]: "", [`${at}/point_correlation`]: "", [`${at}/scale`]: "" };
  change({ ...forgetting(state.texts, `${at}/points`), ...texts }, null, name);
}

/** Puts what an answer found onto the bench, as one step. @param {import("./door.js").OntoBench} onto */
export function putOnto({ name, values, uncertainty }) {
  const text = (/** @type {string} */ pointer, /** @type {number | string} */ value) =>
    typeof value === "number" ? core.write_number(pointer, value, state.mark) : value;
  const avalanche = values.some(({ pointer }) => pointer.startsWith("/detector/avalanche/"));
  const found = Object.fromEntries(values.map(({ pointer, value }) => [pointer, text(pointer, value)]));
  const inputs = uncertainty.inputs.map(({ pointer, standard, degrees_of_freedom: freedom }) => ({ pointer, name: "", standard: text(pointer, standard), distribution: "normal", ...(freedom && { degrees_of_freedom: String(freedom) }) }));
  const doubts = instead(doubtsOf(state.texts), inputs, uncertainty.correlations);
  change({ ...withDoubts(state.texts, doubts), ...found, ...(avalanche && { [DETECTOR_TYPE]: "avalanche" }) }, null, name);
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
