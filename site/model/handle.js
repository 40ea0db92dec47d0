// What can be moved on the sheet, as the engine tells it: a value of the plan that
// stands at an instant and goes along with it. Holds no DOM.

import { num } from "../base/format.js";

/**
 * @typedef {object} Handle
 * @property {number} event that moves, or the window whose end does
 * @property {number[]} marks further events at whose marks it can be taken hold of
 * @property {boolean} end of a window
 * @property {boolean} fixed its end stays where it is, and the pointer sets its length
 * @property {number} t_ms where it stands
 * @property {number} from_ms where the span began that it ends
 * @property {number} per milliseconds it moves for each by which the value, or the interval of a rate, grows
 * @property {number} coupling_ms since the site of a stimulus was last depolarised, or -1
 * @property {number} y0 mm
 * @property {number} y1 mm
 * @property {string} path in the plan
 * @property {string} label
 * @property {string} unit "ms" or "/min"
 * @property {number} value now
 * @property {number} min
 * @property {number} max
 * @property {number} step
 */

/**
 * Reads the wire form; see wasm/live/session/handles.go.
 * @param {{values: any[], list: number[][]} | undefined} wire
 * @returns {Handle[]}
 */
export function readHandles(wire) {
  return (wire?.list ?? []).map(([event, place, t_ms, from_ms, per, flags, coupling_ms, y0, y1, ...marks]) => ({
    event, t_ms, from_ms, per, end: (flags & 1) !== 0, fixed: (flags & 2) !== 0, coupling_ms, y0, y1, marks, .../** @type {any} */ (wire).values[place],
  }));
}

/** A rate as its interval and back; a length stays. @param {Handle} h @param {number} v */
const turned = (h, v) => (h.unit === "/min" ? 60000 / Math.max(v, 1e-6) : v);

/**
 * The value that brings a handle to an instant.
 * @param {Handle} h
 * @param {number} ms
 * @param {number} [step]
 * @returns {{value: number, limit: "" | "most" | "least"}} limit: it cannot go further
 */
export function valueAt(h, ms, step = h.step) {
  const length = turned(h, h.value) + (ms - h.t_ms) / h.per;
  if (h.unit === "/min" && length <= 0) return { value: h.max, limit: "most" };
  const value = Number((Math.round(turned(h, length) / step) * step).toFixed(4));
  if (value > h.max) return { value: h.max, limit: "most" };
  if (value < h.min) return { value: h.min, limit: "least" };
  return { value, limit: "" };
}

/**
 * Where a handle stands with a value, the rest of the strip being as it is.
 * @param {Handle} h
 * @param {number} value
 */
export function timeOf(h, value) {
  return h.t_ms + (turned(h, value) - turned(h, h.value)) * h.per;
}

const FINEST = [5, 2, 1, 0.5, 0.2, 0.1];

/**
 * The step of a drag: the value's own, or a finer one where it would leap on the sheet.
 * @param {Handle} h
 * @param {number} pxPerMs
 */
export function stepFor(h, pxPerMs) {
  const leap = (/** @type {number} */ step) => Math.abs(timeOf(h, h.value + step) - h.t_ms) * pxPerMs;
  return FINEST.find((s) => s <= h.step && leap(s) <= 1.6) ?? (h.unit === "/min" ? 0.1 : 1);
}

/**
 * A handle's value some steps later (or earlier) in time.
 * @param {Handle} h
 * @param {number} steps
 */
export function later(h, steps) {
  const grows = h.per > 0 === (h.unit !== "/min");
  const value = Number((h.value + (grows ? steps : -steps) * h.step).toFixed(4));
  return Math.min(Math.max(value, h.min), h.max);
}

/**
 * A handle with a value, in words.
 * @param {Handle} h
 * @param {number} value
 */
export function told(h, value) {
  const text = `${h.label} ${num(value, 1)} ${h.unit}`.trim();
  return h.coupling_ms >= 0 ? `${text}, ${num(h.coupling_ms, 0)} ms after the last beat there` : text;
}

/**
 * The handle of an event: its own, one that can be taken hold of at its mark, or that
 * of a window which ended with it.
 * @param {Handle[]} handles
 * @param {number} event
 * @param {number} ms of the event
 */
export function handleOf(handles, event, ms) {
  return handles.find((h) => h.event === event) ?? handles.find((h) => h.marks.includes(event)) ?? handles.find((h) => h.end && Math.abs(h.t_ms - ms) < 0.01) ?? null;
}

/**
 * The handle of the same value that stands nearest to an instant: the one that was
 * moved there, in a timeline computed anew.
 * @param {Handle[]} handles
 * @param {Handle} moved
 * @param {number} ms
 * @returns {Handle | null}
 */
export function sameHandle(handles, moved, ms) {
  let best = null;
  for (const h of handles) {
    if (h.path !== moved.path || h.end !== moved.end || (h.marks.length > 0) !== (moved.marks.length > 0)) continue;
    if (!best || Math.abs(h.t_ms - ms) < Math.abs(best.t_ms - ms)) best = h;
  }
  return best;
}
