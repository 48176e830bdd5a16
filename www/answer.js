/** An answer on the page. It knows how answers look, and nothing of what they are about. */

import { h } from "./dom.js";
import { copy } from "./copy.js";
import { csvOf, fileName, save } from "./files.js";
import { marked } from "./numbers.js";
import { chartFigure } from "./chart/figure.js";

/**
 * @typedef {import("./door.js").Answer} Answer
 * @typedef {import("./door.js").Shown} Shown
 * @typedef {import("./door.js").Budget} Budget
 * @typedef {import("./door.js").Table} Table
 * @typedef {import("./door.js").Mark} Mark
 */

/**
 * @param {Answer} answer
 * @param {Mark} mark
 * @returns {HTMLElement[]}
 */
export function answerView(answer, mark) {
  const { shown } = answer;
  const parts = [
    headline(answer, mark),
    doubts(shown, mark),
    facts(shown, mark),
    cautions(shown, mark),
    shown.budgets.length > 0 && h("div", { class: "budgets" }, shown.budgets.map((budget) => budgetView(budget, mark))),
    ...(answer.curves ?? []).map((curve) => chartFigure(curve, mark)),
    ...shown.tables.map((table) => tableView(table, mark)),
    notes(shown, mark),
  ];
  return parts.filter((part) => part instanceof HTMLElement);
}

/** @param {Answer} answer @param {Mark} mark */
function headline({ shown, onto_bench: onto }, mark) {
  const figure = marked(shown.headline.figure, mark);
  return h(
    "div",
    { class: "headline" },
    h("p", { class: "headline-text" }, h("span", { class: "headline-figure" }, figure), " ", marked(shown.headline.sentence, mark)),
    shown.headline.uncertainty && h("p", { class: "headline-doubt" }, marked(shown.headline.uncertainty, mark)),
    shown.cautions.length > 0 && h("p", { class: "caution cautions-named" }, "Before you touch anything: ", h("a", { href: "#cautions", click: toCautions }, shown.cautions.map(({ about }) => about.toLowerCase()).join(", "))),
    h(
      "div",
      { class: "actions" },
      h("button", { type: "button", class: "main", id: "keep" }, "Keep this answer"),
      onto && h("button", { type: "button", id: "onto-bench" }, onto.name),
      copyButton(figure, figure, "Copy figure"),
      h("button", { type: "button", click: () => copy(answerText(shown, mark), "the answer") }, "Copy answer"),
    ),
  );
}

/** The address keeps the question. @param {MouseEvent} event */
function toCautions(event) {
  event.preventDefault();
  const cautions = document.getElementById("cautions");
  cautions?.scrollIntoView({ block: "nearest" });
  cautions?.focus({ preventScroll: true });
}

/** @param {string} figure @param {string} si @param {string} [label] */
function copyButton(figure, si, label) {
  const click = (/** @type {MouseEvent} */ event) => (event.shiftKey ? copy(si, si) : copy(figure, figure));
  const key = (/** @type {KeyboardEvent} */ event) => {
    if (event.ctrlKey || event.metaKey || event.altKey) return;
    if (event.key === "c") copy(figure, figure);
    if (event.key === "C") copy(si, si);
  };
  const props = { type: "button", click, keydown: key, title: si === figure ? `Copy ${figure}` : `Copy ${figure} (with Shift: ${si})` };
  if (label) return h("button", props, label);
  return h("button", { ...props, class: "copy", "aria-label": `Copy ${figure}` }, h("span", { class: "copy-mark", "aria-hidden": "true" }));
}

/** @param {Shown} shown @param {Mark} mark */
export function doubts({ doubts: list }, mark) {
  if (list.length === 0) return null;
  return h("div", { class: "doubts" }, list.map((sentence) => h("p", { class: "doubt" }, h("b", {}, "In doubt. "), marked(sentence, mark))));
}

/** @param {Shown} shown @param {Mark} mark */
function cautions({ cautions: list }, mark) {
  if (list.length === 0) return null;
  const sentences = list.map(({ about, sentence }) => h("p", { class: "caution" }, h("b", {}, `${capital(about)}. `), marked(sentence, mark)));
  return h("section", { class: "cautions", id: "cautions", "aria-label": "Cautions", tabindex: -1 }, sentences);
}

/** @param {string} text */
const capital = (text) => text.charAt(0).toUpperCase() + text.slice(1);

/** @param {Shown} shown @param {Mark} mark */
export function facts({ facts: list }, mark) {
  if (list.length === 0) return null;
  const rows = list.map((fact) => {
    const figure = marked(fact.figure, mark);
    return h(
      "div",
      { class: "fact" },
      h("dt", {}, fact.name),
      h("dd", {}, h("span", { class: "figure" }, figure), copyButton(figure, marked(fact.copy || fact.figure, mark))),
      fact.note && h("dd", { class: "fact-note" }, marked(fact.note, mark)),
    );
  });
  return h("dl", { class: "facts" }, rows);
}

/** @param {Budget} budget @param {Mark} mark */
function budgetView(budget, mark) {
  const greatest = Math.max(...budget.rows.map(({ share }) => share), Number.MIN_VALUE);
  const rows = budget.rows.map(({ cause, figure, share }) => {
    const bar = h("span", { class: "bar", "aria-hidden": "true" });
    bar.style.width = `${(100 * Math.max(share, 0)) / greatest}%`;
    return h(
      "tr",
      {},
      h("th", { scope: "row" }, cause),
      h("td", { class: "bar-cell" }, bar),
      h("td", { class: "num" }, marked(percent(share), mark)),
      h("td", { class: "num" }, marked(figure, mark)),
    );
  });
  const heads = ["Cause", "", "Share", "Amount"].map((text, i) => h("th", { scope: "col", class: i > 1 ? "num" : "" }, text || h("span", { class: "unseen" }, "Bar")));
  return h(
    "table",
    { class: "budget" },
    h("caption", {}, h("b", {}, budget.title), h("span", { class: "total" }, marked(budget.total, mark))),
    h("thead", {}, h("tr", {}, heads)),
    h("tbody", {}, rows),
  );
}

/** A share as it is read: none is shown as zero that is not zero. @param {number} share */
export function percent(share) {
  if (share === 0) return "0 %";
  if (share < 0.0005) return "< 0.1 %";
  return `${(100 * share).toFixed(1)} %`;
}

/** @param {Table} table @param {Mark} mark */
export function tableView(table, mark) {
  const tsv = [table.columns, ...table.rows].map((row) => row.map((cell) => marked(cell, mark)).join("\t")).join("\n");
  return h(
    "section",
    { class: "table-view" },
    h(
      "div",
      { class: "section-head" },
      h("h3", {}, table.title),
      h(
        "div",
        { class: "tools" },
        h("button", { type: "button", class: "quiet", click: () => copy(tsv, `the table “${table.title}”`) }, "Copy table"),
        h("button", { type: "button", class: "quiet", click: () => save(`${fileName(table.title)}.csv`, "text/csv", csvOf(table, mark)) }, "Save CSV"),
      ),
    ),
    h(
      "div",
      { class: "scroll", tabindex: 0, role: "region", "aria-label": table.title },
      h(
        "table",
        { class: "plain" },
        h("thead", {}, h("tr", {}, table.columns.map((text) => h("th", { scope: "col" }, text)))),
        h("tbody", {}, table.rows.map((row) => h("tr", {}, row.map((cell) => h("td", {}, marked(cell, mark)))))),
      ),
    ),
  );
}

/** @param {Shown} shown @param {Mark} mark */
export function notes({ notes: list }, mark) {
  if (list.length === 0) return null;
  return h("section", { class: "notes" }, h("h3", {}, "Assumed, and by which method"), h("ul", {}, list.map((sentence) => h("li", {}, marked(sentence, mark)))));
}

/** The answer as lines of text. @param {Shown} shown @param {Mark} mark */
export function answerText(shown, mark) {
  const lines = [
    `${shown.headline.figure} ${shown.headline.sentence}`,
    ...(shown.headline.uncertainty ? [shown.headline.uncertainty] : []),
    ...shown.facts.map(({ name, figure }) => `${name}: ${figure}`),
    ...shown.budgets.flatMap((budget) => [
      `${budget.title}: ${budget.total}`,
      ...budget.rows.map(({ cause, figure, share }) => `  ${cause}: ${figure} (${percent(share)})`),
    ]),
    ...shown.tables.flatMap((table) => [table.title, table.columns.join("\t"), ...table.rows.map((row) => row.join("\t"))]),
    ...shown.doubts.map((sentence) => `In doubt: ${sentence}`),
    ...shown.cautions.map(({ about, sentence }) => `${capital(about)}: ${sentence}`),
    ...shown.notes,
  ];
  return lines.map((line) => marked(line, mark)).join("\n");
}
