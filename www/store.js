/** The browser's own store, if there is one: any of this may fail, and the page works without. */

const PREFIX = "leastlight/1/";

/** @template T @param {string} key @param {T} otherwise @returns {T} */
export function load(key, otherwise) {
  try {
    const text = localStorage.getItem(PREFIX + key);
    return text === null ? otherwise : JSON.parse(text);
  } catch {
    return otherwise;
  }
}

/** @param {string} key @param {unknown} value @returns {boolean} whether it is kept */
export function save(key, value) {
  try {
    localStorage.setItem(PREFIX + key, JSON.stringify(value));
    return true;
  } catch {
    return false;
  }
}

/** Another window of the page changed the store. @param {string} key @param {() => void} listener */
export function onForeignChange(key, listener) {
  addEventListener("storage", (event) => {
    if (event.key === PREFIX + key) listener();
  });
}
