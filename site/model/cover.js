// What comes next, covered: where a beat ends, and a scene without anything that would
// tell what comes after an instant. Holds no DOM.

import { placeOf, TEXT } from "../engine/scene.js";

/**
 * @typedef {import("../engine/scene.js").Scene} Scene
 * @typedef {import("../engine/scene.js").Mark} Mark
 * @typedef {import("../engine/wire.js").Overview} Overview
 */

/** How long after its beginning a wave is over, for a cover, in ms: a P, and a QRS with most of its T. */
const OVER = { atrium: 120, ventricle: 380 };

/** How long before the next wave a cover begins at the latest, ms. */
const AHEAD = 20;

/**
 * The instants at which everything may be covered that comes later. After every wave
 * of the atria and the ventricles stands one; "beat" marks those at which a beat is
 * over, an atrial wave with the ventricular one that follows it.
 * @param {Overview} overview
 * @param {number} span
 * @returns {{t: number, beat: boolean}[]}
 */
export function stops(overview, span) {
  const waves = [
    ...overview.atrium.map((t) => ({ t, chamber: /** @type {const} */ ("atrium") })),
    ...overview.ventricle.map((t) => ({ t, chamber: /** @type {const} */ ("ventricle") })),
  ].sort((a, b) => a.t - b.t);
  /** @type {{t: number, beat: boolean}[]} */
  const out = [];
  waves.forEach((w, i) => {
    const next = waves[i + 1];
    const t = Math.min(w.t + OVER[w.chamber], next ? next.t - AHEAD : span, span);
    const beat = !next || next.chamber === "atrium" || w.chamber === "ventricle";
    const last = out[out.length - 1];
    if (last && t <= last.t) last.beat = beat; // two waves at once are one stop
    else if (t > w.t) out.push({ t, beat });
  });
  return out;
}

/**
 * The stop that follows an instant, or comes before it; the ends of the strip beyond.
 * @param {{t: number, beat: boolean}[]} all
 * @param {number} t
 * @param {1 | -1} way
 * @param {boolean} beats only those at which a beat is over
 * @param {number} span
 */
export function stopFrom(all, t, way, beats, span) {
  const fit = all.filter((s) => !beats || s.beat);
  const next = way > 0 ? fit.find((s) => s.t > t) : fit.findLast((s) => s.t < t);
  return next?.t ?? (way > 0 ? span : (fit[0]?.t ?? 0));
}

/** Classes whose marks say something of the whole strip. */
const TELLS_ALL = ["note", "title", "body"];

/** The area of a wave in the leads: it says nothing, and reaches far. */
const WAVE = "wave";

/**
 * A scene without the marks that would tell what comes after an instant: those of later
 * events wherever they stand, and dimension lines and texts that belong to something
 * that is not over.
 * @param {Scene} scene
 * @param {number} until milliseconds
 * @returns {Scene}
 */
export function covered(scene, until) {
  const edge = placeOf(scene, until);
  const later = new Set(scene.times.filter(([, t]) => t > until).map(([id]) => id));
  const open = new Set(scene.marks.filter((m) => m.event !== 0 && m.cls !== WAVE && right(m) > edge).map((m) => m.event));
  const marks = scene.marks.filter((m) => {
    if (TELLS_ALL.includes(m.cls)) return false;
    if (m.event === 0) return true;
    if (later.has(m.event)) return false;
    return !open.has(m.event) || !(m.shape === TEXT || m.cls.startsWith("dim"));
  });
  return { ...scene, marks };
}

/** @param {Mark} m */
function right(m) {
  return Math.max(m.x, m.x2, m.x + m.r);
}
