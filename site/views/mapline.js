// A sweep of one value: bands of behaviours and curves of numbers over one axis.

import { num } from "../base/format.js";
import { axisX, boxOf, frame, MARGIN, paintBounds, sortsOf, tag } from "./mapchart.js";

/**
 * @typedef {import("../model/grid.js").Grid} Grid
 * @typedef {import("../engine/sweeper.js").Run} Run
 * @typedef {import("./inks.js").Inks} Inks
 * @typedef {import("./mapchart.js").Box} Box
 * @typedef {import("./mapchart.js").Sorts} Sorts
 */

const BAND = 30;
const CURVE = 92;
const GAP = 22;

/** How high a chart of one axis is. @param {Grid} grid */
export const lineHeight = (grid) => MARGIN.top + MARGIN.bottom + grid.outcomes().reduce((h, o) => h + GAP + (o.kind === "number" ? CURVE : BAND), 0);

/**
 * Bands of behaviours and curves of numbers over one axis.
 * @param {CanvasRenderingContext2D} g @param {Inks} inks @param {number} width @param {Run} run
 */
export function paintLine(g, inks, width, run) {
  const grid = /** @type {Grid} */ (run.grid);
  const all = { ...boxOf(grid, width, lineHeight(grid)) };
  const X = (/** @type {number} */ i) => all.x + (all.w * i) / grid.nx;
  let y = all.y;
  for (const o of grid.outcomes()) {
    const s = sortsOf(grid, o.name);
    g.textAlign = "left";
    g.textBaseline = "alphabetic";
    g.fillStyle = inks.colour("ink");
    g.fillText(o.unit ? `${o.label}, ${o.unit}` : o.label, all.x, y + GAP - 6);
    y += GAP;
    const box = { x: all.x, y, w: all.w, h: o.kind === "number" ? CURVE : BAND };
    if (o.kind === "number") curve(g, inks, box, grid, s, o.name, X);
    else band(g, inks, box, run, s, o.name, X);
    frame(g, inks, box);
    y += box.h;
  }
  axisX(g, inks, { ...all, h: y - all.y }, grid.head.x, grid.nx);
}

/** @param {CanvasRenderingContext2D} g @param {Inks} inks @param {Box} box @param {Run} run @param {Sorts} s @param {string} outcome @param {(i: number) => number} X */
function band(g, inks, box, run, s, outcome, X) {
  const grid = /** @type {Grid} */ (run.grid);
  for (let i = 0; i < grid.nx;) {
    const at = (/** @type {number} */ p) => (grid.stand(p) < 0 ? -1 : s.at(grid.stand(p)));
    const k = at(i);
    let to = i + 1;
    while (to < grid.nx && at(to) === k) to++;
    if (k >= 0) {
      g.fillStyle = inks.fill(s.sorts[k].look);
      g.fillRect(X(i), box.y, X(to) - X(i), box.h);
      if (g.measureText(s.sorts[k].text).width + 12 < X(to) - X(i)) tag(g, inks, s.sorts[k].text, (X(i) + X(to)) / 2, box.y + box.h / 2, box, []);
    }
    i = to;
  }
  paintBounds(g, inks, box, { ...run, bounds: new Map([[outcome, (run.bounds.get(outcome) ?? []).filter((b) => b.along === 0)]]) }, outcome);
}

/** @param {CanvasRenderingContext2D} g @param {Inks} inks @param {Box} box @param {Grid} grid @param {Sorts} s @param {string} outcome @param {(i: number) => number} X */
function curve(g, inks, box, grid, s, outcome, X) {
  if (!(s.high >= s.low)) return;
  const pad = (s.high - s.low) * 0.08 || 1;
  const Y = (/** @type {number} */ v) => box.y + box.h - (box.h * (v - s.low + pad)) / (s.high - s.low + 2 * pad);
  g.textAlign = "right";
  g.textBaseline = "middle";
  for (const v of s.cuts.filter((_, i) => s.cuts.length < 5 || i % 2 === 0)) {
    g.fillStyle = inks.colour("rule");
    g.fillRect(box.x, Math.round(Y(v)), box.w, 1);
    g.fillStyle = inks.colour("ink-soft");
    g.fillText(num(v, 2), box.x - 6, Y(v));
  }
  g.strokeStyle = g.fillStyle = inks.colour("device");
  g.lineWidth = 1.5;
  g.beginPath();
  let open = false;
  for (let i = 0; i < grid.nx; i++) {
    const v = grid.at(i, outcome)?.number;
    if (v === undefined || v === null) {
      if (grid.has(i)) open = false;
      continue;
    }
    if (open) g.lineTo(X(i + 0.5), Y(v));
    else g.moveTo(X(i + 0.5), Y(v));
    open = true;
    if (grid.nx < 80) g.fillRect(X(i + 0.5) - 1.5, Y(v) - 1.5, 3, 3);
  }
  g.stroke();
}
