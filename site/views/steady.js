// The focus never falls off the page. What is filled anew takes its focus back, by what
// it points at; where that is gone, the focus goes to the heading of its part.

/** What tells an element from its neighbours, in the order in which it is trusted. */
const NAMES = ["id", "data-event", "data-setting", "data-from", "data-slug", "data-panel", "data-preset", "data-help", "aria-label"];

/**
 * @typedef {object} Place where the focus was
 * @property {Element[]} above its ancestors, the nearest first
 * @property {(string | null)[]} names
 * @property {string} text
 * @property {string} tag
 */

/** @param {Element} node @returns {Place} */
function placeOf(node) {
  const above = [];
  for (let e = node.parentElement; e; e = e.parentElement) above.push(e);
  return { above, names: NAMES.map((n) => node.getAttribute(n)), text: node.textContent ?? "", tag: node.tagName };
}

/** Whether the focus can stay on it. @param {Element} node */
function stands(node) {
  return node.isConnected && !(/** @type {any} */ (node).disabled) && node.checkVisibility({ visibilityProperty: true });
}

/** The one of a part that was meant, or null. @param {Element} part @param {Place} was */
function same(part, was) {
  const all = [...part.querySelectorAll(was.tag.toLowerCase())].filter(stands);
  for (const [i, name] of NAMES.entries()) {
    const value = was.names[i];
    const hit = value && all.find((e) => e.getAttribute(name) === value);
    if (hit) return hit;
  }
  return was.text !== "" ? all.find((e) => e.textContent === was.text) ?? null : null;
}

/**
 * Watches over the focus of the whole page.
 * @param {() => HTMLElement | null} last where it goes when its part is gone too
 */
export function steadyFocus(last) {
  let held = /** @type {Element | null} */ (null);
  let was = /** @type {Place | null} */ (null);
  let due = 0;

  /** @param {FocusEvent} e */
  function remember(e) {
    if (!(e.target instanceof Element) || e.target === document.body) return;
    held = e.target;
    was = placeOf(held);
  }

  /** A press beside everything lets go of the focus: that is meant. @param {PointerEvent} e */
  function press(e) {
    if (e.target instanceof Element && !e.target.closest("button, a, input, select, summary, [tabindex]")) held = null;
  }

  function mend() {
    due = 0;
    const now = document.activeElement;
    if (!held || !was || (now && now !== document.body && now !== held) || stands(held)) return;
    const part = was.above.find((e) => stands(e) && e !== document.body && (same(e, was ?? placeOf(e)) || e.querySelector("h2, h3")));
    const heading = /** @type {HTMLElement | null} */ (part?.querySelector("h2, h3") ?? null);
    const to = (part && /** @type {HTMLElement | null} */ (same(part, was))) ?? (heading && stands(heading) ? heading : last());
    if (!to) return;
    if (to === heading) heading.tabIndex = -1;
    to.focus({ preventScroll: true });
  }

  const watch = new MutationObserver(() => {
    if (held && !due) due = requestAnimationFrame(mend);
  });
  watch.observe(document.body, { childList: true, subtree: true, attributes: true, attributeFilter: ["hidden", "disabled", "open", "class"] });
  document.addEventListener("focusin", remember);
  document.addEventListener("pointerdown", press, true);
  return {
    destroy() {
      cancelAnimationFrame(due);
      watch.disconnect();
      document.removeEventListener("focusin", remember);
      document.removeEventListener("pointerdown", press, true);
    },
  };
}
