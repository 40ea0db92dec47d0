// Calipers: two instants of the strip and what lies between them. Holds no DOM.

import { num } from "../base/format.js";

/**
 * @typedef {object} Calipers
 * @property {boolean} on
 * @property {number} a_ms
 * @property {number} b_ms
 * @property {boolean} march the interval is repeated along the strip
 * @property {{a_ms: number, b_ms: number}[]} pins pairs that stay
 * @property {{y0_mm: number, y1_mm: number} | null} level two heights on the sheet; null: not measured
 */

/** @type {Calipers} */
export const NO_CALIPERS = { on: false, a_ms: 0, b_ms: 0, march: false, pins: [], level: null };

/** [id, milliseconds, intervention, 1 for what people measure from]; see Scene. @typedef {[number, number, number, number]} Timed */

/**
 * The instant that a leg takes near a place: of what people measure from, the nearest
 * within reach; else of any event; else the place itself.
 * @param {Timed[]} times
 * @param {number} ms
 * @param {number} reach ms
 * @param {boolean} upper among the events before a change
 */
export function snapped(times, ms, reach, upper = false) {
  let best = ms;
  let least = Infinity;
  let rank = -1;
  for (const [id, at, , measured] of times) {
    const d = Math.abs(at - ms);
    if (d > reach || (id < 0) !== upper || measured < rank || (measured === rank && d >= least)) continue;
    best = at;
    least = d;
    rank = measured;
  }
  return best;
}

/**
 * The next instant that people measure from, or undefined beyond the last.
 * @param {Timed[]} times
 * @param {number} ms
 * @param {1 | -1} way
 */
export function nextInstant(times, ms, way) {
  const least = 0.5; // two events nearer than that are one to the eye
  let best;
  for (const [id, at, , measured] of times) {
    if (id < 0 || measured === 0 || way * (at - ms) < least) continue;
    if (best === undefined || way * (at - best) < 0) best = at;
  }
  return best;
}

/**
 * Where the legs stand when they are first taken up: on two ventricular beats in the
 * middle of what is shown, else a third of it apart.
 * @param {number[]} beats ms
 * @param {number} t0
 * @param {number} width ms
 */
export function firstPlaces(beats, t0, width) {
  const seen = beats.filter((t) => t >= t0 && t <= t0 + width);
  const k = Math.max(0, Math.floor(seen.length / 2) - 1);
  if (seen.length >= 2) return { a_ms: seen[k], b_ms: seen[k + 1] };
  return { a_ms: t0 + width / 3, b_ms: t0 + (2 * width) / 3 };
}

/**
 * What lies between the legs: "812 ms", "74/min", "20.3 mm".
 * @param {number} ms
 * @param {number} mm_per_s
 */
export function readings(ms, mm_per_s) {
  const d = Math.abs(ms);
  const out = [`${num(d, d < 10 ? 1 : 0)} ms`];
  if (d >= 100) out.push(`${num(60000 / d, 0)}/min`); // faster than 600/min is no rate
  out.push(`${num((d / 1000) * mm_per_s, 1)} mm`);
  return out;
}

/**
 * The legs that repeat the interval between two instants, with their count from the
 * nearer leg; none where they would stand too close.
 * @param {Calipers} c
 * @param {number} from ms
 * @param {number} to ms
 * @param {number} closest ms between two legs
 * @returns {{t: number, n: number}[]}
 */
export function marched(c, from, to, closest) {
  const d = Math.abs(c.b_ms - c.a_ms);
  if (d < closest || d === 0) return [];
  const left = Math.min(c.a_ms, c.b_ms);
  const right = Math.max(c.a_ms, c.b_ms);
  const out = [];
  for (let n = Math.max(1, Math.ceil((left - to) / d)); left - n * d >= from; n++) out.push({ t: left - n * d, n });
  for (let n = Math.max(1, Math.ceil((from - right) / d)); right + n * d <= to; n++) out.push({ t: right + n * d, n });
  return out;
}
