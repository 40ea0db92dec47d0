// Building and reading the document. Imports nothing.

/** @typedef {Node | string | null | undefined | false} Child */

/**
 * Makes an element. Keys that begin with "on" are listeners, "class" is the
 * class name, keys with a dash are attributes, the rest are properties.
 * @template {keyof HTMLElementTagNameMap} K
 * @param {K} tag
 * @param {Record<string, any> | null} [props]
 * @param {...(Child | Child[])} children
 * @returns {HTMLElementTagNameMap[K]}
 */
export function el(tag, props, ...children) {
  const node = document.createElement(tag);
  for (const [key, value] of Object.entries(props ?? {})) {
    if (value === undefined || value === null || value === false) continue;
    if (key.startsWith("on")) node.addEventListener(key.slice(2), value);
    else if (key === "class") node.className = value;
    else if (key.includes("-") || key === "role" || key === "for" || key === "list") node.setAttribute(key, String(value));
    else /** @type {any} */ (node)[key] = value;
  }
  append(node, children);
  return node;
}

/**
 * @param {Element} node
 * @param {(Child | Child[])[]} children
 */
export function append(node, children) {
  for (const child of /** @type {Child[]} */ (children.flat(Infinity))) {
    if (child !== null && child !== undefined && child !== false) node.append(child);
  }
}

/**
 * Replaces all that an element holds.
 * @param {Element} node
 * @param {...(Child | Child[])} children
 */
export function fill(node, ...children) {
  node.replaceChildren();
  append(node, children);
}

/**
 * Sets text only where it differs, so that a live region does not speak twice.
 * @param {Element} node
 * @param {string} text
 */
export function say(node, text) {
  if (node.textContent !== text) node.textContent = text;
}

/**
 * A number unique in this page, for ids that labels refer to.
 */
let serial = 0;
/** @param {string} stem */
export function uid(stem) {
  serial++;
  return `${stem}-${serial}`;
}

/**
 * Whether keys typed now belong to a field that takes text.
 * @param {EventTarget | null} target
 */
export function typing(target) {
  if (!(target instanceof HTMLElement)) return false;
  if (target instanceof HTMLInputElement) return !["checkbox", "radio", "range", "button"].includes(target.type);
  return target instanceof HTMLTextAreaElement || target instanceof HTMLSelectElement || target.isContentEditable;
}
