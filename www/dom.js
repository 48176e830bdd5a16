/** Elements in one line. */

/** @typedef {Node | string | null | false | undefined} Child */

/**
 * @template {keyof HTMLElementTagNameMap} K
 * @param {K} tag
 * @param {Record<string, string | number | boolean | null | undefined | ((event: any) => void)>} [props]
 *   functions listen, `true` sets an empty attribute, false and null set none
 * @param {...(Child | Child[])} children
 * @returns {HTMLElementTagNameMap[K]}
 */
export function h(tag, props = {}, ...children) {
  const element = document.createElement(tag);
  for (const [key, value] of Object.entries(props)) {
    if (typeof value === "function") element.addEventListener(key, value);
    else if (value === true) element.setAttribute(key, "");
    else if (value !== false && value !== null && value !== undefined) element.setAttribute(key, String(value));
  }
  element.append(...children.flat().filter(present));
  return element;
}

/** @param {Child} child @returns {child is Node | string} */
const present = (child) => child !== null && child !== false && child !== undefined && child !== "";

/**
 * @param {string} tag
 * @param {Record<string, string | number | null>} [attributes]
 * @param {...(Node | string)} children
 * @returns {SVGElement}
 */
export function s(tag, attributes = {}, ...children) {
  const element = document.createElementNS("http://www.w3.org/2000/svg", tag);
  for (const [key, value] of Object.entries(attributes)) {
    if (value !== null) element.setAttribute(key, typeof value === "number" ? String(Math.round(value * 100) / 100) : value);
  }
  element.append(...children);
  return element;
}

/** An element that the page itself holds. @param {string} id @returns {HTMLElement} */
export function byId(id) {
  const element = document.getElementById(id);
  if (!element) throw new Error(`the page lacks #${id}`);
  return element;
}

/** @param {string} id @returns {HTMLInputElement} */
export const inputById = (id) => /** @type {HTMLInputElement} */ (byId(id));

/** Sets text only where it differs: a live region speaks each time it is set. @param {Element} element @param {string} text */
export function setText(element, text) {
  if (element.textContent !== text) element.textContent = text;
}
