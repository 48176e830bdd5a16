/** Files in and out, with nothing but what every browser offers from disk. */

import { h, inputById } from "./dom.js";
import { marked } from "./numbers.js";

/** @param {string} name @param {string} type @param {string} text */
export function save(name, type, text) {
  const url = URL.createObjectURL(new Blob([text], { type }));
  const link = h("a", { href: url, download: name });
  document.body.append(link);
  link.click();
  link.remove();
  // The download may begin a moment later.
  setTimeout(() => URL.revokeObjectURL(url), 60_000);
}

/** Text of a file; spreadsheets like to write UTF-16, or Windows' own eight bits. @param {Blob} file @returns {Promise<string>} */
export async function textOf(file) {
  const bytes = new Uint8Array(await file.arrayBuffer());
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return new TextDecoder("utf-16le").decode(bytes);
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return new TextDecoder("utf-16be").decode(bytes);
  try {
    return new TextDecoder("utf-8", { fatal: true }).decode(bytes);
  } catch {
    return new TextDecoder("windows-1252").decode(bytes);
  }
}

/**
 * A button that opens a file through its hidden input.
 *
 * @param {HTMLElement} button
 * @param {string} inputId
 * @param {(text: string, name: string) => void} use
 */
export function opens(button, inputId, use) {
  const input = inputById(inputId);
  button.addEventListener("click", () => input.click());
  input.addEventListener("change", async () => {
    const [file] = input.files ?? [];
    if (!file) return;
    const text = await textOf(file);
    // The same file, chosen again, is a change again.
    input.value = "";
    use(text, file.name);
  });
}

/**
 * A place onto which a file may be dropped.
 *
 * @param {HTMLElement} place
 * @param {(text: string, name: string) => void} use
 */
export function takesDrops(place, use) {
  const carriesFile = (/** @type {DragEvent} */ event) => event.dataTransfer?.types.includes("Files") ?? false;
  place.addEventListener("dragover", (event) => {
    if (!carriesFile(event)) return;
    event.preventDefault();
    event.stopPropagation();
    place.classList.add("dropping");
  });
  place.addEventListener("dragleave", () => place.classList.remove("dropping"));
  place.addEventListener("drop", async (event) => {
    place.classList.remove("dropping");
    const [file] = event.dataTransfer?.files ?? [];
    if (!file) return;
    event.preventDefault();
    event.stopPropagation();
    use(await textOf(file), file.name);
  });
}

/** A file name out of a title. @param {string} title */
export function fileName(title) {
  const plain = title.normalize("NFKD").replace(/[^\w\s-]/g, "").trim().replace(/\s+/g, "-").toLowerCase();
  return plain || "untitled";
}

/**
 * A table as a spreadsheet opens it: cells parted by commas, or by semicolons where the comma is the decimal mark.
 *
 * @param {import("./door.js").Table} table
 * @param {import("./door.js").Mark} mark
 */
export function csvOf({ columns, rows }, mark) {
  const part = mark === "comma" ? ";" : ",";
  // A spreadsheet takes the true minus sign for a letter, and a dash for a value.
  const plain = (/** @type {string} */ cell) => (cell === "–" ? "" : marked(cell, mark).replaceAll("−", "-"));
  const quoted = (/** @type {string} */ cell) => (/[",;\r\n]/.test(cell) ? `"${cell.replaceAll('"', '""')}"` : cell);
  const line = (/** @type {string[]} */ cells) => cells.map((cell) => quoted(plain(cell))).join(part);
  return `${[columns, ...rows].map(line).join("\r\n")}\r\n`;
}
