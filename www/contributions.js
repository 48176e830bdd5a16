/** Further uncertainties of a calibration: a list that a person makes. */

import { byId, h } from "./dom.js";

/**
 * @typedef {import("./bench.js").Texts} Texts
 * @typedef {{ name: string, standard_percent: string, degrees_of_freedom: string }} Contribution as typed
 * @typedef {(texts: Texts, open: string | null, name?: string) => void} Change
 */

export const NAME = "transfer/contributions";

/** What often counts, with a size that is common practice for single-mode connectors and good meters. @type {[string, string][]} */
export const USUAL = [
  ["connector, mated anew", "0.5"],
  ["linearity between the two levels", "0.3"],
  ["reference since its calibration", "0.3"],
  ["polarisation", "0.2"],
  ["reflections between connectors", "0.2"],
  ["wavelength of the light", "0.1"],
];

/** @param {Texts} texts @returns {Contribution[]} */
export function contributionsOf(texts) {
  try {
    const list = JSON.parse(texts[NAME] || "[]");
    const text = (/** @type {unknown} */ value) => (typeof value === "string" ? value : "");
    return Array.isArray(list) ? list.map((one) => ({ name: text(one?.name), standard_percent: text(one?.standard_percent), degrees_of_freedom: text(one?.degrees_of_freedom) })) : [];
  } catch {
    // The store can be written by others; what is not of our making is left alone.
    return [];
  }
}

/** @param {Texts} texts @param {Contribution[]} list @returns {Texts} */
export const withContributions = (texts, list) => ({ ...texts, [NAME]: list.length > 0 ? JSON.stringify(list) : "" });

/** Whether a size is still the one that was proposed. @param {Contribution} one */
export const isProposed = ({ name, standard_percent: size }) => USUAL.some(([usual, percent]) => usual === name && percent === size);

/** The texts that the list shows, so that typing in it does not draw it anew. @type {Texts} */
let now = {};

/** @param {Texts} texts @param {Change} change */
export function listContributions(texts, change) {
  now = texts;
  const list = contributionsOf(texts);
  const place = byId("transfer-contributions");
  if (place.childElementCount !== list.length) place.replaceChildren(...list.map((_, index) => row(index, change)));
  [...place.children].forEach((item, index) => {
    const one = list[index];
    if (!one) return;
    for (const input of item.querySelectorAll("input")) {
      const text = one[/** @type {keyof Contribution} */ (input.dataset.key)];
      if (input.value !== text) input.value = text;
    }
    const mark = /** @type {HTMLElement | null} */ (item.querySelector(".proposed"));
    if (mark) mark.hidden = !isProposed(one);
  });
  offer(change);
}

/** @param {number} index @param {Change} change */
function row(index, change) {
  const name = (/** @type {string} */ key) => `${NAME}/${index}/${key}`;
  const id = (/** @type {string} */ key) => `transfer-contribution-${index}-${key.replaceAll("_", "-")}`;
  const field = (/** @type {keyof Contribution} */ key, /** @type {string} */ label, /** @type {string} */ placeholder) => {
    const input = (/** @type {InputEvent} */ event) => {
      const { value } = /** @type {HTMLInputElement} */ (event.target);
      change(withContributions(now, contributionsOf(now).map((one, at) => (at === index ? { ...one, [key]: value } : one))), name(key), `Contribution ${index + 1}`);
    };
    const props = { type: "text", id: id(key), name: name(key), "data-key": key, "aria-label": `${label} of contribution ${index + 1}`, autocomplete: "off", spellcheck: "false", placeholder, input };
    return h("input", { ...props, "aria-describedby": `${id(key)}-fault` });
  };
  const fault = (/** @type {string} */ key) => h("p", { class: "fault", id: `${id(key)}-fault`, hidden: true });
  const remove = () => change(withContributions(now, contributionsOf(now).filter((_, at) => at !== index)), null, `Contribution ${index + 1} removed`);
  return h(
    "li",
    {},
    h(
      "div",
      { class: "contribution" },
      field("name", "Name", "what"),
      field("standard_percent", "Standard uncertainty in per cent", "u / %"),
      field("degrees_of_freedom", "Degrees of freedom", "ν: ∞"),
      h("button", { type: "button", class: "quiet", "aria-label": `Remove contribution ${index + 1}`, click: remove }, "Remove"),
    ),
    h("p", { class: "small proposed", hidden: true }, "Common practice: replace it by what you know of your own."),
    ...["name", "standard_percent", "degrees_of_freedom"].map(fault),
  );
}

/** The list of what may be added. @param {Change} change */
function offer(change) {
  const select = /** @type {HTMLSelectElement} */ (byId("transfer-add"));
  if (select.options.length > 0) return;
  const items = USUAL.map(([name, percent], index) => h("option", { value: index }, `${name}, ${percent} %`));
  select.append(h("option", { value: "" }, "choose…"), ...items, h("option", { value: "own" }, "one of your own"));
  select.addEventListener("change", () => {
    if (select.value === "") return;
    const [name, standard_percent] = USUAL[Number(select.value)] ?? ["", ""];
    const list = [...contributionsOf(now), { name, standard_percent, degrees_of_freedom: "" }];
    select.value = "";
    change(withContributions(now, list), null, `Contribution added${name ? `: ${name}` : ""}`);
    document.getElementById(`transfer-contribution-${list.length - 1}-${name ? "standard-percent" : "name"}`)?.focus();
  });
}
