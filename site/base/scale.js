// The page's only map between time and pixels. Imports nothing.

/** CSS pixels a millimetre, by the standard's 96 a printed inch. */
export let PX_PER_MM = 96 / 25.4;

/**
 * Draws everything larger, for a room; 1 is the printed size.
 * @param {number} times
 */
export function magnify(times) {
  PX_PER_MM = (times * 96) / 25.4;
}

/**
 * A linear map from milliseconds of the strip to pixels.
 * @typedef {{t0: number, x0: number, pxPerMs: number}} TimeScale
 */

/**
 * @param {number} t0 milliseconds at the left edge
 * @param {number} x0 pixels of the left edge
 * @param {number} mmPerS paper speed
 * @param {number} pxPerMm
 * @returns {TimeScale}
 */
export function timeScale(t0, x0, mmPerS, pxPerMm) {
  return { t0, x0, pxPerMs: (mmPerS * pxPerMm) / 1000 };
}

/**
 * @param {TimeScale} s
 * @param {number} t milliseconds
 */
export function xOf(s, t) {
  return s.x0 + (t - s.t0) * s.pxPerMs;
}

/**
 * @param {TimeScale} s
 * @param {number} x pixels
 */
export function tOf(s, x) {
  return s.t0 + (x - s.x0) / s.pxPerMs;
}

/**
 * @param {number} v
 * @param {number} lo
 * @param {number} hi
 */
export function clamp(v, lo, hi) {
  return Math.min(Math.max(v, lo), Math.max(lo, hi));
}
