// What stands at a point of a map, in words.

import { count, num } from "../base/format.js";
import { saying } from "../model/behaviour.js";

/**
 * @typedef {import("../model/grid.js").Grid} Grid
 * @typedef {import("../model/grid.js").About} About
 */

/** A value of an axis, for people. @param {any} v */
export function valueText(v) {
  if (v === null) return "absent";
  if (v === true) return "on";
  if (v === false) return "off";
  return typeof v === "number" ? num(v, 3) : String(v).replaceAll("_", " ");
}

/** @param {string} unit */
export const withUnit = (unit) => (unit === "" ? "" : unit.startsWith("/") || unit === "%" ? unit : ` ${unit}`);

/** Where a point is: "sinus rate 130/min, PVARP 250 ms". @param {Grid} grid @param {number} p */
export function whereText(grid, p) {
  const { x, y } = grid.head;
  const values = grid.values(p);
  return [x, y].flatMap((a, i) => (a ? [`${a.label} ${valueText(values[i])}${typeof values[i] === "number" ? withUnit(a.unit) : ""}`] : [])).join(", ");
}

/** One outcome at a point. @param {Grid} grid @param {number} p @param {About} o */
export function outcomeText(grid, p, o) {
  const e = grid.at(p, o.name);
  if (!e) return "";
  const seeds = grid.head.seeds.length;
  if (o.kind === "number") {
    if (e.number === null) return "none";
    const spread = seeds > 1 && e.max > e.min ? `, ${num(e.min, 1)} to ${num(e.max, 1)} over ${count(e.n, "run")}` : "";
    return `${num(e.number, 1)}${withUnit(o.unit)}${spread}`;
  }
  if (seeds === 1) return saying(o.name, e.word);
  return e.counts.map(([w, n]) => `${saying(o.name, w)} in ${n} of ${seeds}`).join(", ") || "nothing";
}

/** All of a point in one sentence. @param {Grid} grid @param {number} p @param {string} first outcome that is shown */
export function pointText(grid, p, first) {
  const why = grid.refused(p);
  if (why !== undefined) return `${whereText(grid, p)}: no such plan can be. ${why}`;
  if (!grid.has(p)) return `${whereText(grid, p)}: not computed yet.`;
  const all = grid.outcomes();
  const ordered = [...all.filter((o) => o.name === first), ...all.filter((o) => o.name !== first)];
  return `${whereText(grid, p)}: ${ordered.map((o) => `${o.label} ${outcomeText(grid, p, o)}`).join("; ")}.`;
}
