/** The texts of a calibration by comparison, and what the core is asked of them. Nothing here touches the document. */

import { parsedChoices } from "./bench.js";
import { NAME as CONTRIBUTIONS, contributionsOf } from "./contributions.js";

/** @typedef {import("./bench.js").Texts} Texts */

export const REFERENCE = "transfer/reference_points";
export const READINGS = "transfer/readings";
export const FACTOR = "transfer/coverage_factor";

/** Whether a control holds one text; the contributions are one list. @param {string} name */
export const isPlain = (name) => name.startsWith("transfer/") && !name.startsWith(`${CONTRIBUTIONS}/`);

/** What the core is asked, out of the texts. @param {Texts} texts */
export function asked(texts) {
  const given = (/** @type {string} */ key) => texts[`transfer/${key}`] ?? "";
  const table = (/** @type {string} */ name) => parsedChoices(texts, name);
  const choices = table(REFERENCE);
  const certificate = { table: { text: texts[REFERENCE] ?? "", ...(choices && { choices }) }, coverage_factor: texts[FACTOR] ?? "" };
  return {
    readings: texts[READINGS] ?? "",
    bench: { meter: (texts[REFERENCE] ?? "").trim() ? { certificate } : null },
    choices: {
      table: table(READINGS),
      reference: given("reference"),
      date: given("date"),
      reference_certificate: given("reference_certificate"),
      reference_device: given("reference_device"),
      test_device: given("test_device"),
      coverage_probability: given("coverage_probability") || null,
      reference_degrees_of_freedom: given("reference_degrees_of_freedom"),
      contributions: contributionsOf(texts),
    },
  };
}

/** The control that owns a fault. @param {string} pointer @returns {string} */
export function ownerName(pointer) {
  const [, at = "", key = "", index = "", field = ""] = pointer.split("/");
  if (at === "choices" && key === "contributions") return `${CONTRIBUTIONS}/${index}/${field || "name"}`;
  if (at === "choices" && key !== "table") return `transfer/${key}`;
  if (pointer.startsWith("/meter/certificate/coverage_factor")) return FACTOR;
  return at === "meter" ? REFERENCE : READINGS;
}
