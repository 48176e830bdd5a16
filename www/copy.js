/** Copying, on any kind of host, and saying aloud what happened. */

import { byId, h } from "./dom.js";

/** @param {string} sentence for everyone: shown for a moment and spoken */
export function say(sentence) {
  const line = byId("said");
  line.textContent = sentence;
  line.classList.add("fresh");
  clearTimeout(fade);
  fade = setTimeout(() => line.classList.remove("fresh"), 4000);
}

/** @type {ReturnType<typeof setTimeout> | undefined} */
let fade;

/** @param {string} text @param {string} what as it is spoken: "Copied …" */
export async function copy(text, what) {
  // A spreadsheet takes the true minus sign for a letter.
  const plain = text.replaceAll("−", "-");
  const copied = (await byClipboard(plain)) || bySelection(plain);
  say(copied ? `Copied ${what}` : "This browser did not let the page copy; select the text and copy it by hand");
}

/** @param {string} text @returns {Promise<boolean>} */
async function byClipboard(text) {
  try {
    await navigator.clipboard.writeText(text);
    return true;
  } catch {
    return false;
  }
}

/** Plain http is no secure context and has no clipboard, but this old way. @param {string} text @returns {boolean} */
function bySelection(text) {
  const focused = /** @type {HTMLElement | null} */ (document.activeElement);
  const area = h("textarea", { class: "unseen", readonly: true });
  area.value = text;
  document.body.append(area);
  area.select();
  const copied = document.execCommand("copy");
  area.remove();
  focused?.focus();
  return copied;
}
