// The small bar that shows where a value lies in its normal range.

import { el } from "../base/dom.js";
import { clamp } from "../base/scale.js";

/**
 * The middle third of the bar is the normal range; a value further out than one
 * width of the range stands at the end.
 * @param {number} value
 * @param {[number, number]} normal
 */
export function fraction(value, [lo, hi]) {
  const width = hi > lo ? hi - lo : Math.max(1, Math.abs(lo));
  return clamp((value - lo + width) / (3 * width), 0, 1);
}

/**
 * The value at a fraction of the bar: the other way round.
 * @param {number} at
 * @param {[number, number]} normal
 */
export function valueAt(at, [lo, hi]) {
  const width = hi > lo ? hi - lo : Math.max(1, Math.abs(lo));
  return lo - width + clamp(at, 0, 1) * 3 * width;
}

/**
 * Where a value lies, in one word.
 * @param {number} value
 * @param {[number, number]} normal
 */
export function verdict(value, [lo, hi]) {
  return value < lo ? "low" : value > hi ? "high" : "normal";
}

export function rangeBar() {
  const dot = el("i", { class: "dot" });
  const node = el("span", { class: "range", "aria-hidden": "true" }, el("i", { class: "band" }), dot);
  return {
    node,
    /** @param {any} value @param {[number, number] | null} normal */
    show(value, normal) {
      node.classList.toggle("blank", normal === null);
      const known = normal !== null && typeof value === "number" && Number.isFinite(value);
      dot.hidden = !known;
      if (!known || !normal) return;
      dot.style.left = `${100 * fraction(value, normal)}%`;
      node.dataset.verdict = verdict(value, normal);
    },
  };
}
