// What Settings knows of a pacemaker beside the engine's catalogue: plain names of
// its groups, of its choices, and what a mode's letters say.

import { el } from "../base/dom.js";
import { words } from "../base/format.js";

/**
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 * @typedef {import("../engine/wire.js").Field} Field
 */

/** Headings of what few people set, by the place of a field. @type {[string, string][]} */
const FOLDED = [
  ["pavb_ms", "Crosstalk"], ["crosstalk_window_ms", "Crosstalk"], ["safety_stimulus", "Crosstalk"],
  ["atrial_blanking_ms", "Further refractory periods"], ["atrial_refractory_ms", "Further refractory periods"],
  ["post_pvc_pvarp_ms", "Further refractory periods"], ["refractory_p_counts", "Further refractory periods"],
  ["av_past_lower_rate", "Further refractory periods"], ["atrial_delay_ms", "Further refractory periods"],
  ["adaptive_av", "Adaptive AV delay and PVARP"], ["adaptive_pvarp", "Adaptive AV delay and PVARP"],
  ["hysteresis", "Hysteresis"],
  ["longer_av", "Longer AV delay"],
  ["shorter_av", "Shorter AV delay"],
  ["noise", "Noise"],
  ["max_sensor_rate_bpm", "Sensor"], ["sensor", "Sensor"],
  ["change_limit", "Rate-change limit"],
  ["night", "Night"],
  ["mode_switch", "Mode switching"],
  ["loop", "Endless loop"],
  ["rate_fall", "Sudden rate fall"],
  ["stabilise", "Interval stabilisation"],
  ["backup", "Backup pacing"],
  ["magnet", "Magnet"],
  ["left", "Left ventricular pacing"],
  ["leads.atrial", "Atrial lead"],
  ["leads.ventricular", "Ventricular lead"],
  ["leads.left", "Left lead"],
  ["leads", "Far field and T wave"],
];

/** As in the table of Settings: place, group, heading. @type {[string, string, string][]} */
export const DEVICE_PLACES = [
  ...FOLDED.map(([name, title]) => /** @type {[string, string, string]} */ ([`pacemaker.${name}`, "Pacemaker", title])),
  ["pacemaker", "Pacemaker", "Pacemaker"],
];

/**
 * The heading under which a folded field of the device stands, to tell it from others
 * of the same name: "hysteresis: "; empty for the everyday ones.
 * @param {string} path
 */
export function headingOf(path) {
  const title = FOLDED.find(([name]) => path === `pacemaker.${name}` || path.startsWith(`pacemaker.${name}.`))?.[1];
  return title ? `${title[0].toLowerCase()}${title.slice(1)}: ` : "";
}

/**
 * Gives a field of the device the words of its choices.
 * @param {Catalogue} catalogue
 */
export function deviceChoices(catalogue) {
  const sites = Object.fromEntries(catalogue.sites.map((s) => [s.name, s.label]));
  return (/** @type {Field} */ f) => {
    if (!f.path.startsWith("pacemaker.") || f.kind !== "choice") return f;
    return { ...f, names: Object.fromEntries((f.choices ?? []).map((c) => [c, sites[c] ?? words(c)])) };
  };
}

/** @type {Record<string, string>} */
const CHAMBER = { A: "atrium", V: "ventricle", D: "both chambers", O: "nothing" };

/**
 * A mode's letters in words: "paces both chambers, senses both chambers, tracks P".
 * @param {string} code
 */
export function modeWords(code) {
  const [paced, sensed, response, rate] = code;
  const answer = response === "T" ? "triggers" : response === "I" ? "is inhibited" : response === "D" ? "tracks P, is inhibited by R" : "";
  return [`paces ${CHAMBER[paced]}`, `senses ${CHAMBER[sensed]}`, answer, rate === "R" && "rate by sensor"].filter(Boolean).join(", ");
}

/** @typedef {(code: string) => boolean} Uses */
const tracks = /** @type {Uses} */ (([p, s, r]) => r === "D" && "AD".includes(s) && "VD".includes(p));
const pacesBoth = /** @type {Uses} */ (([p]) => p === "D");
const hearsAtriumForVentricle = /** @type {Uses} */ (([p, s]) => "AD".includes(s) && "VD".includes(p));
const hearsVentricle = /** @type {Uses} */ (([, s]) => "VD".includes(s));

/** Which modes use an everyday number. @type {Record<string, Uses>} */
const USES = {
  "pacemaker.max_tracking_rate_bpm": tracks,
  "pacemaker.sensed_av_ms": tracks,
  "pacemaker.paced_av_ms": pacesBoth,
  "pacemaker.base_timing": pacesBoth,
  "pacemaker.pvarp_ms": hearsAtriumForVentricle,
  "pacemaker.pvab_ms": hearsAtriumForVentricle,
  "pacemaker.ventricular_refractory_ms": hearsVentricle,
};

/**
 * Whether a mode lets a number of the device lie idle.
 * @param {string} path
 * @param {string} code
 */
export function idle(path, code) {
  return /^[OAVD]{2}[OTID]/.test(code) && USES[path]?.(code) === false;
}

/** Modes that a field of its own takes, by its path. @type {Record<string, string[]>} */
const OWN = {
  "pacemaker.magnet.mode": ["AOO", "VOO", "DOO"],
  "pacemaker.mode_switch.mode": ["DDI", "DDIR", "VVI", "VVIR"],
};

/** What a field for a mode suggests; any other text may be typed. @param {Catalogue} catalogue */
export function modeLists(catalogue) {
  const rated = catalogue.modes.filter((m) => !m.startsWith("O")).map((m) => `${m}R`);
  return catalogue.fields.filter((f) => f.kind === "mode").map((f) =>
    el("datalist", { id: `modes-${f.path}` }, (OWN[f.path] ?? [...catalogue.modes, ...rated]).map((m) => el("option", { value: m }, modeWords(m)))));
}
