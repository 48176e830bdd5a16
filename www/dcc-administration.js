/** What a person said for a digital certificate, as the core takes it. Nothing here touches the document. */

/** @typedef {import("./bench.js").Texts} Texts */

const PREFIX = "dcc/";

/**
 * Texts by `dcc/item/name` into `{ item: { name } }`; blank ones are not there.
 *
 * @param {Texts} texts
 * @param {string[]} history sentences about where the numbers come from
 */
export function administrationOf(texts, history) {
  /** @type {Record<string, any>} */
  const out = history.length > 0 ? { history } : {};
  for (const [name, text] of Object.entries(texts)) {
    if (!name.startsWith(PREFIX) || text.trim() === "") continue;
    const keys = name.slice(PREFIX.length).split("/");
    const last = keys.pop() ?? "";
    const at = keys.reduce((place, key) => (place[key] ??= {}), out);
    at[last] = text.trim();
  }
  return out;
}

/** The field that owns a fault; null where none does. @param {string} pointer @param {string[]} names */
export function ownerName(pointer, names) {
  const name = pointer.replace(/^\/administration\//, PREFIX);
  return names.find((one) => one === name) ?? names.find((one) => one.startsWith(`${name}/`)) ?? null;
}
