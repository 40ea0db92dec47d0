// What a print is asked for, from what is chosen and what the timeline shows. Holds
// no DOM.

import { FIXED, show } from "./lanes.js";
import { shown } from "./view.js";

/** @typedef {import("../engine/press.js").Order} Order */

/**
 * @typedef {object} Choice
 * @property {string} print one of PRINTS
 * @property {string} format one of FORMATS
 * @property {string} paper one of PAPERS
 * @property {string} range "view" or "whole"
 * @property {number} speed mm/s
 * @property {number} gain mm/mV
 * @property {"full" | "plain" | "none"} ladder
 * @property {boolean} device its lane, where there is one
 * @property {string} form how the twelve leads are set, one of the view's PAPERS
 * @property {string} date as 2026-12-01, or ""
 * @property {number} page of the preview, and of a picture
 */

/** @type {[string, string][]} */
export const PRINTS = [
  ["strip", "Strip: leads and ladder"], ["ladder", "Ladder alone"], ["twelve", "Twelve leads"], ["report", "Report"],
  ["comparison", "Before and after"], ["data", "Data for other programs"],
];

/** @type {{drawing: [string, string][], data: [string, string][]}} */
export const FORMATS = {
  drawing: [["pdf", "PDF"], ["svg", "SVG"], ["png", "PNG"]],
  data: [["edf", "EDF+"], ["csv", "CSV"], ["json", "JSON"]],
};

/** What each form of data holds. @type {Record<string, string>} */
export const NOTES = {
  edf: "The twelve leads of the whole strip at 1000 samples a second, with every event as an annotation. The file says that it was computed, and holds no identity.",
  csv: "The events of the whole strip as a table, one a line, each with its time, place, cause and numbers.",
  json: "One document with the plan, every event, all measures, the findings and the device's arithmetic.",
};

/** @type {[string, string][]} */
export const PAPERS = [
  ["a4-landscape", "A4, landscape"], ["a4", "A4, portrait"], ["letter-landscape", "Letter, landscape"], ["letter", "Letter, portrait"],
  ["a3-landscape", "A3, landscape"], ["roll", "one long sheet"],
];

export const SPEEDS = [12.5, 25, 50, 100];
export const GAINS = [5, 10, 20];

/** Text stands, strips lie. @param {string} print */
export const usualPaper = (print) => (print === "report" || print === "comparison" ? "a4" : "a4-landscape");

/** Whether the ladder, or else the device, is among the lanes shown. @param {import("./view.js").View} view */
export const usualLadder = (view) => (view.lanes.includes("ladder") ? view.ladder : "none");

const TWELVE_MS = 10000; // a page of twelve leads (common practice)

/**
 * @param {import("./store.js").State} state
 * @param {Choice} c
 * @returns {Order}
 */
export function orderOf(state, c) {
  const { plan, view, answer } = state;
  if (c.print === "data") return { plan };
  const span = answer?.span_ms ?? 0;
  let [from, to] = [0, span];
  if (c.range === "view") {
    from = Math.min(view.t0_ms, span);
    to = Math.min(view.t0_ms + shown(view), span);
    if (c.print === "twelve") {
      from = Math.max(0, Math.min(from, span - TWELVE_MS));
      to = Math.min(from + TWELVE_MS, span);
    } else if (c.print === "report" || c.print === "comparison") to = 0; // as much as a line holds
  }
  /** @type {Order} */
  const order = {
    plan, paper: c.paper, speed_mm_s: c.speed, gain_mm_mv: c.gain, ladder: c.ladder, device: c.device,
    from_ms: from, to_ms: to, date: c.date, page: c.page, version: version(),
  };
  if (c.print === "twelve") order.paper_form = c.form;
  else if (c.print !== "ladder") {
    order.lanes = lanesOf(view, c);
    order.egm_gain = view.egm_gain;
    if (view.paper && c.print === "strip") order.paper_form = view.paper;
  }
  if (c.range === "view" && c.print !== "twelve") order.fill = true;
  if (c.print === "ladder" && c.ladder === "none") order.ladder = "full";
  if (c.print === "comparison") order.before = /** @type {any} */ (state).before?.plan;
  return order;
}

/**
 * The lanes shown, with those that were chosen beside them.
 * @param {import("./view.js").View} view
 * @param {Choice} c
 */
function lanesOf(view, c) {
  let lanes = view.lanes;
  if (c.ladder !== "none") lanes = show(lanes, "ladder");
  if (c.device) lanes = show(lanes, "device");
  return lanes.length > 0 ? lanes : FIXED;
}

/** The version that `make site` wrote into the page. */
function version() {
  const meta = typeof document === "undefined" ? null : document.querySelector('meta[name="version"]');
  return meta?.getAttribute("content") ?? "";
}
