// Which lanes the sheet shows, from top to bottom. Holds no DOM.

import { LEADS } from "./view.js";

/** @typedef {import("./view.js").View} View */

/** Lanes that are not signals, in their usual order. */
export const FIXED = ["axis", "ladder", "device"];

/** @type {Record<string, string>} */
const NAMES = { axis: "Time axis", ladder: "Ladder", device: "Device" };

/** Lanes for usual questions. @type {[string, string[]][]} */
export const LANE_SETS = [
  ["usual", ["I", "II", "V1", "V6"].map(leadLane).concat(FIXED)],
  ["laboratory", [...["I", "AVF", "V1"].map((l) => leadLane(l === "AVF" ? "aVF" : l)), ...["HRA", "HISp", "HISd", "CS9-10", "CS5-6", "CS1-2", "RVA"].map((e) => `egm:${e}`), "axis", "ladder"]],
  ["device check", ["lead:II", "egm:A", "egm:V", ...FIXED]],
  ["membrane", ["lead:II", ...["sinus", "right_atrium", "av_junction", "his", "right_bundle", "rv_apex"].map((s) => `membrane:${s}`), "axis", "ladder"]],
];

/** @param {string} lead */
export function leadLane(lead) {
  return `lead:${lead}`;
}

/** The kind of a lane: "lead", "egm", "membrane", or its own name. @param {string} lane */
export function kindOf(lane) {
  return lane.split(":")[0];
}

/**
 * A lane's name for people.
 * @param {string} lane
 * @param {{name: string, label: string}[]} known electrograms and action potentials
 */
export function laneName(lane, known) {
  const which = lane.slice(lane.indexOf(":") + 1);
  switch (kindOf(lane)) {
    case "lead": return `Lead ${which}`;
    case "egm": return which.length === 1 ? `EGM ${which}` : which;
    case "membrane": return `AP ${known.find((k) => k.name === lane)?.label ?? which}`;
  }
  return NAMES[lane] ?? lane;
}

/**
 * The view with these lanes; what else it says of them follows.
 * @param {View} v
 * @param {string[]} lanes
 * @returns {View}
 */
export function arrange(v, lanes) {
  return { ...v, lanes, leads: LEADS.filter((l) => lanes.includes(leadLane(l))), no_device: !lanes.includes("device") };
}

/**
 * Adds a lane where one would look for it: behind the last of its kind, a signal
 * else behind all signals, the others in their usual order at the end.
 * @param {string[]} lanes
 * @param {string} lane
 */
export function show(lanes, lane) {
  if (lanes.includes(lane)) return lanes;
  const kind = kindOf(lane);
  const out = [...lanes];
  if (FIXED.includes(kind)) {
    const at = lanes.findIndex((l) => FIXED.indexOf(l) > FIXED.indexOf(kind));
    out.splice(at < 0 ? lanes.length : at, 0, lane);
    return out;
  }
  let at = lanes.findLastIndex((l) => kindOf(l) === kind);
  if (at < 0 && kind !== "lead") at = lanes.findLastIndex((l) => l.includes(":"));
  out.splice(at + 1, 0, lane);
  return out;
}

/**
 * @param {string[]} lanes
 * @param {string} lane
 */
export function hide(lanes, lane) {
  return lanes.filter((l) => l !== lane);
}

/**
 * Moves a lane up (-1) or down (1) by one place.
 * @param {string[]} lanes
 * @param {string} lane
 * @param {number} by
 */
export function shift(lanes, lane, by) {
  const at = lanes.indexOf(lane);
  const to = at + by;
  if (at < 0 || to < 0 || to >= lanes.length) return lanes;
  const out = [...lanes];
  [out[at], out[to]] = [out[to], out[at]];
  return out;
}

/**
 * The lanes with exactly these leads: those that stay keep their places.
 * @param {string[]} lanes
 * @param {string[]} leads
 */
export function withLeads(lanes, leads) {
  let out = lanes.filter((l) => kindOf(l) !== "lead" || leads.includes(l.slice(5)));
  for (const l of leads) out = show(out, leadLane(l));
  return out;
}
