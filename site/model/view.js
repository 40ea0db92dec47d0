// What part of the strip is shown and how large. Holds no DOM.

import { clamp } from "../base/scale.js";

/**
 * @typedef {object} View
 * @property {number} t0_ms instant at the left edge
 * @property {number} width_mm room for the time axis, without the gutter
 * @property {number} height_mm room from top to bottom
 * @property {number} mm_per_s paper speed
 * @property {number} mm_per_mv gain
 * @property {string[]} lanes shown, from top to bottom: "lead:II", "egm:HISd", "membrane:his", "axis", "ladder", "device"
 * @property {string[]} leads those among the lanes, in the usual order
 * @property {string} paper the twelve leads in a form of paper instead of the lanes' leads, "3x4 + rhythm"; "" for none
 * @property {number} egm_gain of electrograms, mm a millivolt
 * @property {"plain" | "full"} ladder
 * @property {boolean} ladder_chosen by hand; else it goes by the room there is
 * @property {boolean} no_device the device's lane is left out
 */

export const SPEEDS = [25, 50];
export const GAINS = [5, 10, 20];
/** The twelve leads on paper, rows by columns. */
export const PAPERS = ["3x4 + rhythm", "3x4", "6x2", "6x2 + rhythm", "12x1"];
export const LEADS = ["I", "II", "III", "aVR", "aVL", "aVF", "V1", "V2", "V3", "V4", "V5", "V6"];

/** Slowest and fastest free zoom, in mm/s. */
const MIN_SPEED = 1;
const MAX_SPEED = 800;

/** @type {View} */
export const FIRST_VIEW = { t0_ms: 0, width_mm: 200, height_mm: 140, mm_per_s: 25, mm_per_mv: 10, lanes: ["lead:I", "lead:II", "lead:V1", "lead:V6", "axis", "ladder", "device"], leads: ["I", "II", "V1", "V6"], paper: "", egm_gain: 10, ladder: "plain", ladder_chosen: false, no_device: false };

/** A sheet as high as this, in CSS pixels, has room for every level of the ladder. */
const FULL_FROM_PX = 760;

/**
 * The ladder's form for a sheet of a height.
 * @param {View} v
 * @param {number} px
 */
export function ladderFor(v, px) {
  if (v.ladder_chosen) return v.ladder;
  return px >= FULL_FROM_PX ? "full" : "plain";
}

/**
 * How much of the strip the view shows, in milliseconds.
 * @param {View} v
 */
export function shown(v) {
  return (v.width_mm / v.mm_per_s) * 1000;
}

/**
 * Keeps the view on the strip. A strip shorter than the view starts at the left edge.
 * @param {View} v
 * @param {number} span milliseconds
 * @returns {View}
 */
export function onStrip(v, span) {
  const t0_ms = clamp(v.t0_ms, 0, span - shown(v));
  return t0_ms === v.t0_ms ? v : { ...v, t0_ms };
}

/**
 * @param {View} v
 * @param {number} ms
 * @param {number} span
 */
export function pan(v, ms, span) {
  return onStrip({ ...v, t0_ms: v.t0_ms + ms }, span);
}

/**
 * Changes the speed so that the instant t stays where it is.
 * @param {View} v
 * @param {number} mm_per_s
 * @param {number} t milliseconds
 * @param {number} span
 */
export function zoomTo(v, mm_per_s, t, span) {
  const slowest = Math.max(MIN_SPEED, Math.min(25, (v.width_mm / span) * 1000));
  const speed = clamp(mm_per_s, slowest, MAX_SPEED);
  const t0_ms = t - ((t - v.t0_ms) * v.mm_per_s) / speed;
  return onStrip({ ...v, mm_per_s: speed, t0_ms }, span);
}

/**
 * The speed at which the whole strip fits.
 * @param {View} v
 * @param {number} span
 */
export function fitSpeed(v, span) {
  return (v.width_mm / span) * 1000;
}

/**
 * Moves the view only as far as is needed to have an instant well inside it.
 * @param {View} v
 * @param {number} t
 * @param {number} span
 */
export function reveal(v, t, span) {
  const w = shown(v);
  if (t >= v.t0_ms + w * 0.04 && t <= v.t0_ms + w * 0.96) return v;
  return onStrip({ ...v, t0_ms: t - w / 3 }, span);
}
