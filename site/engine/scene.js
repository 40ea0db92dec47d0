// The wire form of a scene, read. The engine lays out in millimetres; what each
// number means is told in the package comment of engine/scene.

import { readHandles } from "../model/handle.js";

/**
 * @typedef {object} Mark
 * @property {number} shape 1 line, 2 polyline, 3 rectangle, 4 disc, 5 ring, 6 text
 * @property {string} cls
 * @property {number} x
 * @property {number} y
 * @property {number} x2
 * @property {number} y2
 * @property {number} r
 * @property {string} text
 * @property {number} anchor 0 start, 1 middle, 2 end
 * @property {number} event id, 0 for none
 * @property {number} from first of its points in the scene's numbers, as an index
 * @property {number} count of its points
 */

/** @typedef {{name: string, label: string, y0: number, y1: number}} Lane */
/** @typedef {import("../model/handle.js").Handle} Handle */

/**
 * @typedef {object} Scene
 * @property {number} width mm
 * @property {number} height mm
 * @property {number} font_mm
 * @property {{t0_us: number, x0: number, mm_per_s: number}} axis
 * @property {Lane[]} lanes
 * @property {Mark[]} marks
 * @property {Float32Array} points x, y of the points of polylines, from a mark's `from` on
 * @property {[number, number, number, number][]} times of every event that has a mark: id (below 0 before a
 *   change), milliseconds, the place, from 1, of the intervention that made it, 0 for none, and 1 for
 *   one that people measure from
 * @property {Handle[]} handles what can be moved
 * @property {{name: string, y0: number, y1: number}[]} tiers of the ladder, in millimetres
 */

export const LINE = 1;
export const POLY = 2;
export const RECT = 3;
export const DISC = 4;
export const RING = 5;
export const TEXT = 6;

const WIDTH = 11; // numbers a mark

/**
 * @param {any} meta
 * @param {Float32Array | null} numbers
 * @returns {Scene}
 */
export function readScene(meta, numbers) {
  const { marks: count, classes, texts, ...rest } = meta;
  const n = numbers ?? new Float32Array();
  const marks = new Array(count);
  let from = count * WIDTH;
  for (let i = 0, k = 0; i < count; i++, k += WIDTH) {
    const points = n[k + 10];
    marks[i] = {
      shape: n[k], cls: classes[n[k + 1]], x: n[k + 2], y: n[k + 3], x2: n[k + 4], y2: n[k + 5], r: n[k + 6],
      text: n[k + 7] > 0 ? texts[n[k + 7] - 1] : "", anchor: n[k + 8], event: n[k + 9], from, count: points,
    };
    from += 2 * points;
  }
  return { times: [], tiers: [], ...rest, handles: readHandles(rest.handles), marks, points: n };
}

/**
 * The instant at a place on the sheet, in milliseconds of the strip.
 * @param {Scene} s
 * @param {number} x mm
 */
export function timeAt(s, x) {
  return s.axis.t0_us / 1000 + ((x - s.axis.x0) / s.axis.mm_per_s) * 1000;
}

/**
 * The place of an instant, in millimetres.
 * @param {Scene} s
 * @param {number} ms
 */
export function placeOf(s, ms) {
  return s.axis.x0 + ((ms - s.axis.t0_us / 1000) / 1000) * s.axis.mm_per_s;
}

/**
 * How far a mark is from a place, in millimetres.
 * @param {Mark} m
 * @param {number} x
 * @param {number} y
 */
export function distance(m, x, y) {
  switch (m.shape) {
    case LINE: {
      const dx = m.x2 - m.x;
      const dy = m.y2 - m.y;
      const len = dx * dx + dy * dy;
      const u = len === 0 ? 0 : Math.min(1, Math.max(0, ((x - m.x) * dx + (y - m.y) * dy) / len));
      return Math.hypot(x - m.x - u * dx, y - m.y - u * dy);
    }
    case RECT:
      return Math.hypot(Math.max(m.x - x, 0, x - m.x2), Math.max(m.y - y, 0, y - m.y2));
    case DISC:
    case RING:
      return Math.max(0, Math.hypot(x - m.x, y - m.y) - m.r);
  }
  return Infinity;
}

/**
 * The mark with an event that lies nearest to a place, within reach. Where two
 * are as near, the one painted later; an area counts only where nothing else is.
 * @param {Scene} s
 * @param {number} x
 * @param {number} y
 * @param {number} reach mm
 * @returns {Mark | null}
 */
export function nearest(s, x, y, reach) {
  let best = null;
  let least = reach;
  let area = null;
  for (const m of s.marks) {
    if (m.event === 0) continue;
    const d = distance(m, x, y);
    if (m.shape === RECT) {
      if (d === 0) area = m;
    } else if (d <= least) {
      least = d;
      best = m;
    }
  }
  return best ?? area;
}

/**
 * The handle at a place: the one whose upright stands nearest, within reach.
 * @param {Scene} s
 * @param {number} x
 * @param {number} y
 * @param {number} reach mm
 * @returns {Handle | null}
 */
export function handleAt(s, x, y, reach) {
  let best = null;
  let least = reach;
  for (const h of s.handles) {
    const across = Math.abs(placeOf(s, h.t_ms) - x);
    const off = Math.max(h.y0 - y, 0, y - h.y1);
    const bar = h.end; // its neighbours above and below have handles of their own
    const d = bar && off > Math.min(reach, ROW_MM) ? Infinity : Math.hypot(across, off) - (h.path.startsWith("interventions") ? STIMULUS_FIRST_MM : 0);
    if (d < least) {
      least = d;
      best = h;
    }
  }
  return best;
}

const ROW_MM = 0.3; // how far beside its bar a window's end can be taken hold of
const STIMULUS_FIRST_MM = 0.5; // a ring may stand on what it depolarised
