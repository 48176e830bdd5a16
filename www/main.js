/** The page: what happens at each keystroke, and which button does what. */

import { answerView } from "./answer.js";
import { DETECTOR_TYPE, choicesOf, textsOf, typed } from "./bench.js";
import { core, onTrap, start } from "./core.js";
import { byId, h, inputById, setText } from "./dom.js";
import { addNotes, controls, fill, firstChoices, form, inputOf, labelOf, ownerOf, showAlternatives, showFaults, showUnderstood, showUse } from "./fields.js";
import { fileName, opens, save as saveFile, takesDrops } from "./files.js";
import { closed, emptyHistory, recorded, redone, undone } from "./history.js";
import { say } from "./copy.js";
import * as notebook from "./notebook.js";
import { notebookView } from "./notebook-view.js";
import { marked } from "./numbers.js";
import { load, onForeignChange, save } from "./store.js";
import { forgetting, showTables } from "./tables.js";

/**
 * @typedef {import("./bench.js").Texts} Texts
 * @typedef {import("./door.js").Answer} Answer
 * @typedef {import("./door.js").Bench} Bench
 * @typedef {import("./door.js").Fault} Fault
 * @typedef {import("./door.js").Mark} Mark
 * @typedef {import("./notebook.js").Kept} Kept
 */

onTrap((message, fresh) => {
  const banner = byId("banner");
  banner.hidden = false;
  banner.textContent = `The calculation failed by a mistake of this program (${message}). ${fresh ? "It was started afresh" : "Reload the page to start it afresh"}; nothing you typed is lost.`;
});
start();
const [questions, version] = [core.questions(), core.version()];
const all = controls();
addNotes(core.fields());

/** @type {{ texts: Texts, history: import("./history.js").History, question: string, mark: Mark, demo: boolean }} */
const state = { texts: {}, history: emptyHistory(), question: questions[0]?.name ?? "", mark: "auto", demo: true, ...soundState(load("state", {})) };
/** @type {Kept[]} */
let kept = notebook.sound(load("notebook", []));
/** Ids of the answers to compare. @type {string[]} */
let chosen = [];
/** @type {Kept | null} */
let removed = null;
/** The last good answer of each question. @type {Map<string, Answer>} */
const good = new Map();
/** What a file could not be read for. @type {string[]} */
let fileFaults = [];

/** The store can be written by any page from disk; what is not of our making is left alone. @param {any} found */
function soundState(found) {
  const ours = typeof found?.texts === "object" && found.texts !== null && Array.isArray(found.history?.past) && Array.isArray(found.history?.future);
  return ours && Object.values(found.texts).every((text) => typeof text === "string") ? found : {};
}

// --- from texts to an answer --------------------------------------------------------------------------------------

/** Everything on the page follows from the texts. */
function update() {
  const { texts, mark } = state;
  fill(texts);
  showAlternatives(texts);
  const question = questions.find(({ name }) => name === state.question) ?? questions[0];
  if (!question) return;
  const { understood, tables, faults, blocking, answer } = core.follow(question.name, typed(all, texts), mark);
  showUnderstood(texts, understood);
  showTables(texts, tables, changeChoices);
  showUse(question.fields);
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
  answer.replaceChildren(...(found ? answerView(found, state.mark, keep) : []));
  const stale = faults.length > 0;
  answer.classList.toggle("stale", stale);
  const line = byId("state-line");
  line.hidden = !stale;
  const owners = [...new Set(faults.map(({ pointer }) => ownerOf(pointer, all, state.texts)?.name ?? pointer))];
  const says = found ? "This is the last good answer. It waits for: " : "To answer, the bench still needs: ";
  if (stale) line.replaceChildren(says, ...joinedBy(faultLinks(faults, owners), ", "), ".");
  const keepButton = /** @type {HTMLButtonElement | null} */ (document.getElementById("keep"));
  if (keepButton) keepButton.disabled = stale;
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
  inputById("notebook-save").disabled = kept.length === 0;
}

// --- changes ------------------------------------------------------------------------------------------------------

/** @param {Texts} texts @param {string | null} open the field being typed in @param {string} [name] of the step */
function change(texts, open, name) {
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
function put(bench, name) {
  const write = {
    number: (/** @type {string} */ pointer, /** @type {number} */ value) => core.write_number(pointer, value, state.mark),
    table: (/** @type {string} */ pointer) => core.write_table(pointer, bench, state.mark).value ?? "",
  };
  change({ ...firstChoices(), ...textsOf(all, bench, write, firstChoices()) }, null, name);
}

/** @param {typeof undone} step @param {string} says */
function walk(step, says) {
  const to = step(state.history, state.texts);
  if (!to) return;
  state.history = to.history;
  state.texts = to.texts;
  update();
  say(`${says}: ${to.step.name}`);
}

// --- notebook -----------------------------------------------------------------------------------------------------

function keep() {
  const answer = good.get(state.question);
  if (!answer) return;
  const { bench } = core.understand(typed(all, state.texts), state.mark);
  const asks = questions.find(({ name }) => name === state.question)?.asks ?? state.question;
  const when = new Date().toISOString();
  const id = `${when}-${Math.random().toString(36).slice(2, 8)}`;
  setKept([{ id, when, question: state.question, asks, title: state.texts["/title"] ?? "", note: "", version, texts: { ...state.texts }, bench, answer }, ...kept]);
  say("Kept in the notebook");
}

/** @param {Kept[]} entries */
function setKept(entries) {
  kept = entries;
  chosen = chosen.filter((id) => entries.some((entry) => entry.id === id));
  if (!save("notebook", kept)) say("This browser keeps nothing: save the notebook to a file");
  showNotebook();
}

function showNotebook() {
  byId("entries").replaceChildren(...notebookView(kept, chosen, removed !== null, state.mark, deeds, labelOf));
  showTools();
}

/** @type {import("./notebook-view.js").Deeds} */
const deeds = {
  reopen(entry) {
    state.question = entry.question;
    showChooser();
    change(entry.texts, null, `Reopened ${entry.title || "a bench"}`);
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

// --- files --------------------------------------------------------------------------------------------------------

/** A bench or a notebook, whichever the text is. @param {string} text @param {string} name */
function open(text, name) {
  fileFaults = [];
  if (notebook.claims(text)) {
    const found = notebook.read(text);
    if ("sentence" in found) fileFaults = [`${name}: ${found.sentence}`];
    else setKept(notebook.joined(kept, found.kept));
    update();
    say("sentence" in found ? found.sentence : `${found.kept.length} answers taken into the notebook`);
    return;
  }
  const { value, faults = [] } = core.read_bench(text);
  if (value) {
    state.demo = false;
    put(value, `Opened ${name}`);
    say(`Opened ${name}`);
  } else {
    fileFaults = faults.map(({ pointer, sentence }) => [name, pointer, sentence].filter(Boolean).join(": "));
    update();
    byId("summary").scrollIntoView({ block: "nearest" });
    say(`${name} was not opened`);
  }
}

function saveBench() {
  const { bench, faults } = core.understand(typed(all, state.texts), state.mark);
  saveFile(`${fileName(bench.title ?? "")}.bench.json`, "application/json", `${JSON.stringify(bench, null, 2)}\n`);
  if (faults.length > 0) say("Saved without what cannot be read");
}

// --- wiring -------------------------------------------------------------------------------------------------------

function showChooser() {
  const radios = questions.map(({ name, asks }) => {
    const pick = () => {
      state.question = name;
      history.replaceState(null, "", `#${name}`);
      update();
    };
    return h("label", {}, h("input", { type: "radio", name: "question", value: name, checked: name === state.question, change: pick }), h("span", {}, asks));
  });
  byId("chooser").replaceChildren(h("legend", { class: "unseen" }, "Question"), ...radios);
}

form().addEventListener("input", (event) => {
  const input = /** @type {HTMLInputElement} */ (event.target);
  // The selects beneath a table are no fields of the bench.
  if (!input.name) return;
  const { value, name } = input;
  const texts = { ...(value.trim() === "" ? forgetting(state.texts, name) : state.texts), [name]: value };
  change(texts, input instanceof HTMLSelectElement ? null : name);
});
form().addEventListener("focusout", () => (state.history = closed(state.history)));
form().addEventListener("submit", (event) => event.preventDefault());
inputById("title").addEventListener("input", (event) => change({ ...state.texts, "/title": /** @type {HTMLInputElement} */ (event.target).value }, "/title"));
byId("bench").addEventListener("focusin", (event) => {
  const { id } = /** @type {HTMLElement} */ (event.target);
  setText(byId("hint"), document.getElementById(`${id}-hint`)?.textContent ?? "");
});

for (const button of /** @type {NodeListOf<HTMLElement>} */ (document.querySelectorAll("[data-open-table]"))) {
  const id = button.dataset.openTable ?? "";
  const area = /** @type {HTMLTextAreaElement} */ (byId(id));
  const take = (/** @type {string} */ text, /** @type {string} */ file) => {
    change({ ...forgetting(state.texts, area.name), [area.name]: text }, null, `${labelOf(area.name)} from ${file}`);
    say(`Read ${file}`);
  };
  opens(button, `${id}-file`, take);
  takesDrops(area, take);
}
opens(byId("bench-open"), "bench-file", open);
opens(byId("notebook-open"), "notebook-file", open);
takesDrops(document.documentElement, open);
byId("bench-save").addEventListener("click", saveBench);
byId("notebook-save").addEventListener("click", () => saveFile("leastlight.notebook.json", "application/json", notebook.fileText(kept, version)));
byId("bench-clear").addEventListener("click", () => {
  state.demo = false;
  change({ ...firstChoices(), [DETECTOR_TYPE]: "pin" }, null, "Started empty");
  inputOf("/source/wavelength_nm")?.focus();
});
byId("undo").addEventListener("click", () => walk(undone, "Undone"));
byId("redo").addEventListener("click", () => walk(redone, "Done again"));
addEventListener("keydown", (event) => {
  const inText = event.target instanceof HTMLInputElement || event.target instanceof HTMLTextAreaElement;
  if (inText || !(event.ctrlKey || event.metaKey) || event.altKey) return;
  const key = event.key.toLowerCase();
  const again = key === "y" || (key === "z" && event.shiftKey);
  if (key !== "z" && key !== "y") return;
  event.preventDefault();
  if (again) walk(redone, "Done again");
  else walk(undone, "Undone");
});

const mark = /** @type {HTMLSelectElement} */ (byId("decimal-mark"));
mark.value = state.mark;
mark.addEventListener("change", () => {
  state.mark = /** @type {Mark} */ (mark.value);
  update();
  showNotebook();
});
// The short answer at the foot of a phone is for those who do not see the long one.
new IntersectionObserver(([entry]) => byId("mini").classList.toggle("seen", entry?.isIntersecting ?? false)).observe(byId("question"));
const help = /** @type {HTMLDialogElement} */ (byId("help"));
byId("help-open").addEventListener("click", () => help.showModal());
byId("help-close").addEventListener("click", () => help.close());
addEventListener("hashchange", toHash);
onForeignChange("notebook", () => {
  kept = notebook.sound(load("notebook", []));
  showNotebook();
});

function toHash() {
  const name = decodeURIComponent(location.hash.slice(1));
  if (questions.some((question) => question.name === name)) state.question = name;
  showChooser();
  update();
}

byId("colophon").textContent = `Leastlight ${version}. Works offline; nothing leaves this page.`;
addEventListener("beforeprint", () => {
  document.body.setAttribute("data-printed", `Leastlight ${version}, printed ${new Date().toLocaleString("sv")}`);
  // A box cuts its text off on paper; the text itself does not.
  for (const area of form().querySelectorAll("textarea")) {
    const next = area.nextElementSibling;
    const paper = next?.matches(".printed") ? next : h("pre", { class: "printed", "aria-hidden": "true" });
    paper.textContent = area.value;
    area.after(paper);
  }
});
Object.assign(window, { leastlight: core });
toHash();
if (Object.keys(state.texts).length === 0) {
  put(core.demo(), "Demo bench");
  state.history = emptyHistory();
  update();
}
showNotebook();
