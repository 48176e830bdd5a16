/** The page, wired: which field, button and key does what. */

import { DETECTOR_TYPE } from "./bench.js";
import { say } from "./copy.js";
import { core } from "./core.js";
import { isXml, openDcc, prepareDcc, saveDcc } from "./dcc.js";
import { byId, h, inputById, setText } from "./dom.js";
import { doubtsOf, withDoubts } from "./doubts/text.js";
import { addDoubt } from "./doubts/view.js";
import { firstChoices, form, inputOf, labelOf, openFor } from "./fields.js";
import { fileName, opens, save as saveFile, takesDrops } from "./files.js";
import { closed, emptyHistory, redone, undone } from "./history.js";
import { keep, notebookText, onReopen, showNotebook, take } from "./keeping.js";
import { besideBench, change, goodAnswer, jobs, put, putCertificate, putOnto, questions, sayFileFaults, state, understoodBench, update, version, walk } from "./live.js";
import { startLog } from "./log/panel.js";
import * as notebook from "./notebook.js";
import { forgetting } from "./tables.js";
import { cancel, run } from "./doubts/trials.js";
import { prepareTransfer } from "./transfer.js";

/** @typedef {import("./door.js").Mark} Mark */

const CERTIFICATE = "/meter/certificate/points";

/** A bench or a notebook, whichever the text is. @param {string} text @param {string} name */
function open(text, name) {
  if (isXml(text)) return openCertificate(text, name);
  if (notebook.claims(text)) {
    const found = notebook.read(text);
    sayFileFaults("sentence" in found ? [`${name}: ${found.sentence}`] : []);
    if ("kept" in found) take(found.kept);
    say("sentence" in found ? found.sentence : `${found.kept.length} answers taken into the notebook`);
    return;
  }
  const { value, faults = [] } = core.read_bench(text);
  if (value) {
    state.demo = false;
    put(value, `Opened ${name}`);
    say(`Opened ${name}`);
  } else {
    sayFileFaults(faults.map(({ pointer, sentence }) => [name, pointer, sentence].filter(Boolean).join(": ")));
    byId("summary").scrollIntoView({ block: "nearest" });
    say(`${name} was not opened`);
  }
}

/** A digital certificate, for the meter on the bench. @param {string} text @param {string} from */
function openCertificate(text, from) {
  openDcc(text, from, ({ certificate, identifier }) => putCertificate(certificate, `Certificate ${identifier} from ${from}`));
}

function saveBench() {
  const { bench, faults } = understoodBench();
  saveFile(`${fileName(bench.title ?? "")}.bench.json`, "application/json", `${JSON.stringify(bench, null, 2)}\n`);
  if (faults.length > 0) say("Saved without what cannot be read");
}

/** What can be asked or done, by name. */
const choices = () => [...questions, ...[...jobs].map(([name, { asks }]) => ({ name, asks }))];

/** @param {string} name */
function pick(name) {
  state.question = name;
  history.replaceState(null, "", `#${name}`);
  update();
}

function showChooser() {
  const radios = choices().map(({ name, asks }) =>
    h("label", {}, h("input", { type: "radio", name: "question", value: name, checked: name === state.question, change: () => pick(name) }), h("span", {}, asks)),
  );
  byId("chooser").replaceChildren(h("legend", { class: "unseen" }, "Question"), ...radios);
}

form().addEventListener("input", (event) => {
  const input = /** @type {HTMLInputElement} */ (event.target);
  // The selects beneath a table are no fields of the bench.
  if (!input.name) return;
  const { value, name } = input;
  if (name === CERTIFICATE && isXml(value)) {
    input.value = state.texts[name] ?? "";
    openCertificate(value, "the clipboard");
    return;
  }
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

byId("question").addEventListener("focusout", () => (state.history = closed(state.history)));
form().addEventListener("click", (event) => {
  const { doubt } = /** @type {HTMLElement} */ (event.target).dataset;
  if (doubt) addDoubt(doubt);
});
byId("doubts-add").addEventListener("change", (event) => {
  const select = /** @type {HTMLSelectElement} */ (event.target);
  const what = select.value;
  select.value = "";
  if (what) addDoubt(what);
});
for (const key of /** @type {const} */ (["trials", "seed", "adaptive"])) {
  const input = inputById(`trials-${key}`);
  input.addEventListener("input", () => {
    const doubts = doubtsOf(state.texts);
    const to = key === "adaptive" ? input.checked : input.value;
    change(withDoubts(state.texts, { ...doubts, monte_carlo: { ...doubts.monte_carlo, [key]: to } }), key === "adaptive" ? null : `/uncertainty#${key}`, "Trials");
  });
}
byId("trials-run").addEventListener("click", () => run(state.question, state.texts, () => understoodBench().bench, update));
byId("trials-cancel").addEventListener("click", () => cancel(update));

for (const button of /** @type {NodeListOf<HTMLElement>} */ (form().querySelectorAll("[data-open-table]"))) {
  const id = button.dataset.openTable ?? "";
  const area = /** @type {HTMLTextAreaElement} */ (byId(id));
  const take = (/** @type {string} */ text, /** @type {string} */ file) => {
    if (area.name === CERTIFICATE && isXml(text)) return openCertificate(text, file);
    change({ ...forgetting(state.texts, area.name), [area.name]: text }, null, `${labelOf(area.name)} from ${file}`);
    say(`Read ${file}`);
  };
  opens(button, `${id}-file`, take);
  takesDrops(area, take);
}
for (const button of /** @type {NodeListOf<HTMLElement>} */ (document.querySelectorAll("[data-ask]"))) {
  button.addEventListener("click", () => {
    pick(button.dataset.ask ?? "");
    showChooser();
    byId("question").scrollIntoView({ block: "start" });
    byId("question").focus({ preventScroll: true });
  });
}
byId("dcc-save-open").addEventListener("click", () => {
  const certificate = understoodBench().bench.meter?.certificate;
  if (certificate) saveDcc(certificate);
  else say("There is no certificate to be saved yet");
});
opens(byId("bench-open"), "bench-file", open);
opens(byId("notebook-open"), "notebook-file", open);
takesDrops(document.documentElement, open);
byId("bench-save").addEventListener("click", saveBench);
byId("notebook-save").addEventListener("click", () => saveFile("leastlight.notebook.json", "application/json", notebookText()));
byId("bench-clear").addEventListener("click", () => {
  state.demo = false;
  change({ ...besideBench(), ...firstChoices(), [DETECTOR_TYPE]: "pin" }, null, "Started empty");
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
onReopen(showChooser);
byId("answer").addEventListener("click", (event) => {
  const pressed = /** @type {Element} */ (event.target);
  if (pressed.closest("#keep")) keep();
  const onto = goodAnswer()?.onto_bench;
  if (onto && pressed.closest("#onto-bench")) putOnto(onto);
});

function toHash() {
  const name = decodeURIComponent(location.hash.slice(1));
  if (choices().some((one) => one.name === name)) state.question = name;
  showChooser();
  update();
}

byId("colophon").textContent = `Leastlight ${version}. Works offline; nothing leaves this page.`;
addEventListener("beforeprint", () => {
  document.body.setAttribute("data-printed", `Leastlight ${version}, printed ${new Date().toLocaleString("sv")}`);
  // A box cuts its text off on paper; the text itself does not.
  for (const area of document.querySelectorAll("textarea")) {
    const next = area.nextElementSibling;
    const paper = next?.matches(".printed") ? next : h("pre", { class: "printed", "aria-hidden": "true" });
    paper.textContent = area.value;
    area.after(paper);
  }
});
prepareDcc();
prepareTransfer();
startLog();
Object.assign(window, { leastlight: core });
toHash();
if (Object.keys(state.texts).length === 0) {
  put(core.demo(), "Demo bench");
  state.history = emptyHistory();
  // What was wanting on the empty bench has opened boxes that the demo bench fills.
  openFor(state.question);
  update();
}
showNotebook();
