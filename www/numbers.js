/** Figures as text: the decimal mark of the core's figures, and the page's own for the axes of a chart. */

/** @typedef {import("./door.js").Mark} Mark */

/** A figure of the core with the chosen decimal mark. @param {string} figure @param {Mark} mark */
export function marked(figure, mark) {
  return mark === "comma" ? figure.replace(/(\d)\.(?=\d)/g, "$1,") : figure;
}

/** A number for a spreadsheet: all its digits. @param {number} value @param {Mark} mark */
export function spreadsheet(value, mark) {
  const text = String(value);
  return mark === "comma" ? text.replace(".", ",") : text;
}

const SUPERSCRIPT = "⁰¹²³⁴⁵⁶⁷⁸⁹";

/** @param {number} exponent */
export function superscript(exponent) {
  const digits = [...String(Math.abs(exponent))].map((digit) => SUPERSCRIPT[Number(digit)]).join("");
  return exponent < 0 ? `⁻${digits}` : digits;
}

/**
 * A value read off a chart.
 *
 * @param {number} value
 * @param {number} figures significant figures
 * @param {Mark} mark
 * @returns {string} `−27.03`, `1.2 × 10⁻¹²`
 */
export function readOff(value, figures, mark) {
  const exponent = value === 0 ? 0 : Math.floor(Math.log10(Math.abs(value)));
  if (exponent >= -3 && exponent < 6) return marked(signed(value.toPrecision(Math.max(figures, exponent + 1))), mark);
  const [mantissa, power] = value.toExponential(figures - 1).split("e");
  return marked(`${signed(mantissa ?? "")} × 10${superscript(Number(power))}`, mark);
}

/** @param {string} text with the true minus sign */
export const signed = (text) => text.replace("-", "−");
