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

/** What of a view is chosen by hand and comes back after a reload; where one looks and how much room there is do not. */
const CHOICES = /** @type {const} */ (["mm_per_mv", "lanes", "leads", "paper", "egm_gain", "ladder", "ladder_chosen", "no_device"]);

/** The choices of a view, to be kept. @param {View} v @returns {Partial<View>} */
export function choices(v) {
  return Object.fromEntries(CHOICES.map((k) => [k, v[k]]));
}

/**
 * A view with choices that were kept. What is not of the right kind is left out: the
 * text may have been written by another version of the page.
 * @param {View} v
 * @param {unknown} kept
 * @returns {View}
 */
export function withChoices(v, kept) {
  if (typeof kept !== "object" || kept === null) return v;
  const texts = (/** @type {unknown} */ list) => Array.isArray(list) && list.every((x) => typeof x === "string");
  const known = CHOICES.filter((k) => {
    const value = /** @type {any} */ (kept)[k];
    return Array.isArray(v[k]) ? texts(value) : typeof value === typeof v[k];
  });
  const out = { ...v, ...Object.fromEntries(known.map((k) => [k, /** @type {any} */ (kept)[k]])) };
  if (out.paper !== "" && !PAPERS.includes(out.paper)) out.paper = v.paper;
  if (out.ladder !== "plain" && out.ladder !== "full") out.ladder = v.ladder;
  if (!GAINS.includes(out.mm_per_mv)) out.mm_per_mv = v.mm_per_mv;
  if (!(out.egm_gain > 0 && out.egm_gain <= 100)) out.egm_gain = v.egm_gain;
  const leads = out.lanes.filter((l) => l.startsWith("lead:")).map((l) => l.slice(5));
  const kinds = out.lanes.every((l) => /^(lead|egm|membrane):|^(axis|ladder|device)$/.test(l));
  return kinds && out.lanes.length > 0 && leads.length === out.leads.length && leads.every((l) => LEADS.includes(l) && out.leads.includes(l)) ? out : { ...out, lanes: v.lanes, leads: v.leads };
}

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
