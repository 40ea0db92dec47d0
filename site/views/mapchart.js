// Paints a sweep of two values: regions of behaviour or steps of a number, lines of
// equal value, exact boundaries, axes.

import { num } from "../base/format.js";
import { byMeaning, lookOf, NONE, REFUSED, saying } from "../model/behaviour.js";
import { contour, levels } from "../model/contour.js";
import { nice, tidy } from "../model/sweep.js";
import { valueText, withUnit } from "./mapwords.js";

/**
 * @typedef {import("../model/grid.js").Grid} Grid
 * @typedef {import("../model/behaviour.js").Look} Look
 * @typedef {import("./inks.js").Inks} Inks
 * @typedef {import("../engine/sweeper.js").Run} Run
 * @typedef {{x: number, y: number, w: number, h: number}} Box
 * @typedef {{word: string, text: string, look: Look, count: number}} Sort one behaviour, or one step of a number
 */

/**
 * What there is to tell apart on a map, and which of it every point is: −1 where
 * nothing is known yet.
 * @param {Grid} grid
 * @param {string} outcome
 */
export function sortsOf(grid, outcome) {
  const about = grid.outcomes().find((o) => o.name === outcome);
  const number = about?.kind === "number";
  let low = Infinity;
  let high = -Infinity;
  const words = new Set();
  for (let p = 0; p < grid.of; p++) {
    const e = grid.at(p, outcome);
    if (!e) continue;
    if (!number) words.add(e.word);
    else if (e.number !== null) {
      low = Math.min(low, e.number);
      high = Math.max(high, e.number);
    }
  }
  const cuts = number ? levels(low, high) : [];
  /** @type {Sort[]} */
  const sorts = number ? steps(cuts, low, high, about?.unit ?? "")
    : /** @type {string[]} */ ([...words]).sort(byMeaning).map((word, i) => ({ word, text: saying(outcome, word), look: lookOf(outcome, word, i), count: 0 }));
  const place = new Map(sorts.map((s, i) => [s.word, i]));
  const none = sorts.push({ word: "–", text: "no number", look: NONE, count: 0 }) - 1;
  const refused = sorts.push({ word: "refused", text: "no such plan can be", look: REFUSED, count: 0 }) - 1;
  /** @param {number} p */
  function at(p) {
    if (grid.refused(p) !== undefined) return refused;
    const e = grid.at(p, outcome);
    if (!e) return -1;
    if (!number) return place.get(e.word) ?? -1;
    if (e.number === null) return none;
    let k = 0;
    while (k < cuts.length && e.number >= cuts[k]) k++;
    return k;
  }
  for (let p = 0; p < grid.of; p++) {
    const k = grid.has(p) ? at(p) : -1;
    if (k >= 0) sorts[k].count++;
  }
  return { sorts, at, cuts, number, low, high, about };
}

/** @param {number[]} cuts @param {number} low @param {number} high @param {string} unit @returns {Sort[]} */
function steps(cuts, low, high, unit) {
  if (low > high) return [];
  const u = withUnit(unit);
  return Array.from({ length: cuts.length + 1 }, (_, i) => {
    const a = i === 0 ? low : cuts[i - 1];
    const b = i === cuts.length ? high : cuts[i];
    return { word: String(i), text: a === b ? `${num(a, 1)}${u}` : `${num(a, 1)} to ${num(b, 1)}${u}`, look: { hue: "device", strength: 0.06 + (0.62 * i) / Math.max(1, cuts.length), pattern: "plain" }, count: 0 };
  });
}

/** @typedef {ReturnType<typeof sortsOf>} Sorts */

const DENSE = 4; // pixels between lines of change that are both drawn

export const MARGIN = { left: 62, words: 118, right: 14, top: 10, bottom: 44 };

/**
 * Where the points are, without the axes.
 * @param {Grid} grid @param {number} width @param {number} height
 * @returns {Box}
 */
export function boxOf(grid, width, height) {
  const left = grid.head.y?.values.some((v) => typeof v === "string") ? MARGIN.words : MARGIN.left;
  return { x: left, y: MARGIN.top, w: Math.max(40, width - left - MARGIN.right), h: Math.max(40, height - MARGIN.top - MARGIN.bottom) };
}

/**
 * @param {CanvasRenderingContext2D} g
 * @param {Inks} inks
 * @param {Box} box
 * @param {Run} run
 * @param {Sorts} s
 * @param {string} outcome
 */
export function paintMap(g, inks, box, run, s, outcome) {
  const grid = /** @type {Grid} */ (run.grid);
  const { nx, ny } = grid;
  const kind = new Int16Array(grid.of);
  for (let p = 0; p < grid.of; p++) {
    const q = grid.stand(p);
    kind[p] = q < 0 ? -1 : s.at(q);
  }
  const X = (/** @type {number} */ i) => box.x + Math.round((box.w * i) / nx);
  const Y = (/** @type {number} */ j) => box.y + box.h - Math.round((box.h * j) / ny); // upwards
  for (let j = 0; j < ny; j++) {
    for (let i = 0; i < nx;) {
      const k = kind[j * nx + i];
      let to = i + 1;
      while (to < nx && kind[j * nx + to] === k) to++;
      if (k >= 0) {
        g.fillStyle = inks.fill(s.sorts[k].look);
        g.fillRect(X(i), Y(j + 1), X(to) - X(i), Y(j) - Y(j + 1));
      }
      i = to;
    }
  }
  if (s.number && smooth(grid.head.x) && grid.head.y && smooth(grid.head.y)) paintContours(g, inks, box, grid, s, outcome);
  else if (!s.number) {
    outline(g, inks, grid, kind, X, Y);
    paintBounds(g, inks, box, run, outcome);
  }
  if (!s.number) labels(g, inks, grid, kind, s, box);
  axisX(g, inks, box, grid.head.x, nx);
  if (grid.head.y) axisY(g, inks, box, grid.head.y, ny);
}

/** Whether values lie between those of an axis: equal lines cross no words. @param {import("../model/grid.js").AxisHead} axis */
const smooth = (axis) => axis.values.length > 2 && axis.values.every((v) => typeof v === "number");

/** The border between regions, thin. @param {CanvasRenderingContext2D} g @param {Inks} inks @param {Grid} grid @param {Int16Array} kind @param {(i: number) => number} X @param {(j: number) => number} Y */
function outline(g, inks, { nx, ny }, kind, X, Y) {
  g.strokeStyle = inks.colour("ink");
  g.globalAlpha = 0.35;
  g.lineWidth = 1;
  g.beginPath();
  for (let j = 0; j < ny; j++) {
    for (let i = 0; i < nx; i++) {
      const k = kind[j * nx + i];
      if (i + 1 < nx && kind[j * nx + i + 1] !== k) {
        g.moveTo(X(i + 1), Y(j));
        g.lineTo(X(i + 1), Y(j + 1));
      }
      if (j + 1 < ny && kind[(j + 1) * nx + i] !== k) {
        g.moveTo(X(i), Y(j + 1));
        g.lineTo(X(i + 1), Y(j + 1));
      }
    }
  }
  g.stroke();
  g.globalAlpha = 1;
}

/**
 * Where a value lies on an axis, in columns or rows from 0 at the edge.
 * @param {any[]} values
 * @param {number} v
 */
export function placeOn(values, v) {
  if (values.length === 1) return 0.5;
  let i = 0;
  while (i + 2 < values.length && values[i + 1] < v) i++;
  return i + 0.5 + (v - values[i]) / (values[i + 1] - values[i]);
}

/** @param {CanvasRenderingContext2D} g @param {Inks} inks @param {Box} box @param {Run} run @param {string} outcome */
export function paintBounds(g, inks, box, run, outcome) {
  const grid = /** @type {Grid} */ (run.grid);
  g.strokeStyle = inks.colour("ink");
  g.lineWidth = 2;
  g.beginPath();
  for (const { at, along, found } of run.bounds.get(outcome) ?? []) {
    const values = along === 0 ? grid.head.x.values : grid.head.y?.values ?? [];
    const size = along === 0 ? box.w / grid.nx : box.h / grid.ny;
    let last = -Infinity;
    for (const b of found) {
      const v = (b.low + b.high) / 2;
      const near = placeOn(values, v) * size - last < DENSE;
      last = placeOn(values, v) * size;
      if (near) continue; // a row of lines would hide what lies between them
      if (along === 0) {
        const x = box.x + (box.w * placeOn(grid.head.x.values, v)) / grid.nx;
        g.moveTo(x, box.y + box.h - (box.h * at) / grid.ny);
        g.lineTo(x, box.y + box.h - (box.h * (at + 1)) / grid.ny);
      } else if (grid.head.y) {
        const y = box.y + box.h - (box.h * placeOn(grid.head.y.values, v)) / grid.ny;
        g.moveTo(box.x + (box.w * at) / grid.nx, y);
        g.lineTo(box.x + (box.w * (at + 1)) / grid.nx, y);
      }
    }
  }
  g.stroke();
}

/** @param {CanvasRenderingContext2D} g @param {Inks} inks @param {Box} box @param {Grid} grid @param {Sorts} s @param {string} outcome */
function paintContours(g, inks, box, grid, s, outcome) {
  const { nx, ny } = grid;
  const value = (/** @type {number} */ x, /** @type {number} */ y) => grid.at(y * nx + x, outcome)?.number ?? NaN;
  const X = (/** @type {number} */ x) => box.x + (box.w * (x + 0.5)) / nx;
  const Y = (/** @type {number} */ y) => box.y + box.h - (box.h * (y + 0.5)) / ny;
  g.strokeStyle = inks.colour("ink");
  g.lineWidth = 1.2;
  /** @type {Box[]} */
  const taken = [];
  for (const level of s.cuts) {
    const lines = contour(nx, ny, value, level);
    g.beginPath();
    for (const line of lines) line.forEach(([x, y], i) => (i === 0 ? g.moveTo(X(x), Y(y)) : g.lineTo(X(x), Y(y))));
    g.stroke();
    for (const line of lines.filter((l) => l.length > 3).sort((a, b) => b.length - a.length).slice(0, 3)) {
      for (const share of [0.5, 0.35, 0.65, 0.2, 0.8]) {
        const [x, y] = line[Math.floor(share * (line.length - 1))];
        if (tag(g, inks, num(level, 1), X(x), Y(y), box, taken)) break;
      }
    }
  }
}

/** A word on paper of its own, where no other stands. @param {CanvasRenderingContext2D} g @param {Inks} inks @param {string} text @param {number} x @param {number} y @param {Box} box @param {Box[]} taken */
export function tag(g, inks, text, x, y, box, taken) {
  const w = g.measureText(text).width + 8;
  const b = { x: Math.min(Math.max(x - w / 2, box.x + 1), box.x + box.w - w - 1), y: Math.min(Math.max(y - 8, box.y + 1), box.y + box.h - 17), w, h: 16 };
  if (taken.some((o) => o.x < b.x + b.w + 2 && b.x < o.x + o.w + 2 && o.y < b.y + b.h + 2 && b.y < o.y + o.h + 2)) return false;
  taken.push(b);
  g.fillStyle = inks.colour("paper");
  g.globalAlpha = 0.88;
  g.fillRect(b.x, b.y, b.w, b.h);
  g.globalAlpha = 1;
  g.fillStyle = inks.colour("ink");
  g.textAlign = "center";
  g.textBaseline = "middle";
  g.fillText(text, b.x + w / 2, b.y + 8.5);
  return true;
}

/**
 * Names the largest region of every behaviour at its innermost point, where there is room.
 * @param {CanvasRenderingContext2D} g @param {Inks} inks @param {Grid} grid @param {Int16Array} kind @param {Sorts} s @param {Box} box
 */
function labels(g, inks, { nx, ny }, kind, s, box) {
  /** @type {Map<number, {depth: number, p: number}>} */
  const best = new Map();
  const depth = new Float64Array(kind.length);
  const cw = box.w / nx;
  const ch = box.h / ny;
  // How far to the edge of the region: the nearer of the ends of its row and its column.
  for (const [n, rows, stride, next, size] of [[nx, ny, 1, nx, cw], [ny, nx, nx, 1, ch]]) {
    for (let r = 0; r < rows; r++) {
      for (let i = 0; i < n;) {
        const at = (/** @type {number} */ k) => r * next + k * stride;
        let to = i + 1;
        while (to < n && kind[at(to)] === kind[at(i)]) to++;
        for (let k = i; k < to; k++) {
          const d = Math.min(k - i + 0.5, to - k - 0.5) * size;
          depth[at(k)] = stride === 1 ? d : Math.min(depth[at(k)] / 2, d); // a name is wider than high
        }
        i = to;
      }
    }
  }
  depth.forEach((d, p) => {
    if (kind[p] >= 0 && d > (best.get(kind[p])?.depth ?? 0)) best.set(kind[p], { depth: d, p });
  });
  /** @type {Box[]} */
  const taken = [];
  for (const [k, { depth: d, p }] of [...best].sort((a, b) => b[1].depth - a[1].depth)) {
    const text = s.sorts[k].text;
    if (d < 7 || text.length > 40) continue;
    tag(g, inks, text, box.x + ((p % nx) + 0.5) * cw, box.y + box.h - (Math.floor(p / nx) + 0.5) * ch, box, taken);
  }
}

/** @param {any[]} values @param {number} room how many labels fit */
function ticks(values, room) {
  const every = Math.max(1, Math.ceil(values.length / Math.max(1, room)));
  const numeric = values.every((v) => typeof v === "number") && values.length > 2;
  if (!numeric) return values.map((v, i) => ({ at: i + 0.5, text: valueText(v) })).filter((_, i) => i % every === 0);
  const low = values[0];
  const high = values[values.length - 1];
  const step = nice((high - low) / Math.max(1, Math.min(room, 8)));
  const few = [];
  for (let v = Math.ceil(low / step - 1e-9) * step; v <= high + 1e-9 * step; v += step) few.push(tidy(v));
  return few.map((v) => ({ at: placeOn(values, v), text: num(v, 3) }));
}

/** @param {CanvasRenderingContext2D} g @param {Inks} inks @param {Box} box @param {import("../model/grid.js").AxisHead} axis @param {number} n */
export function axisX(g, inks, box, axis, n) {
  frame(g, inks, box);
  g.textAlign = "center";
  g.textBaseline = "top";
  for (const t of ticks(axis.values, Math.floor(box.w / 70))) {
    const x = box.x + (box.w * t.at) / n;
    g.fillStyle = inks.colour("ink-soft");
    g.fillRect(Math.round(x), box.y + box.h, 1, 4);
    g.fillText(fitting(g, t.text, 90), x, box.y + box.h + 7);
  }
  g.fillStyle = inks.colour("ink");
  g.fillText(titleOf(axis), box.x + box.w / 2, box.y + box.h + 25);
}

/** @param {CanvasRenderingContext2D} g @param {Inks} inks @param {Box} box @param {import("../model/grid.js").AxisHead} axis @param {number} n */
function axisY(g, inks, box, axis, n) {
  g.textAlign = "right";
  g.textBaseline = "middle";
  for (const t of ticks(axis.values, Math.floor(box.h / 26))) {
    const y = box.y + box.h - (box.h * t.at) / n;
    g.fillStyle = inks.colour("ink-soft");
    g.fillRect(box.x - 4, Math.round(y), 4, 1);
    g.fillText(fitting(g, t.text, box.x - 24), box.x - 7, y);
  }
  g.save();
  g.translate(9, box.y + box.h / 2);
  g.rotate(-Math.PI / 2);
  g.textAlign = "center";
  g.fillStyle = inks.colour("ink");
  g.fillText(titleOf(axis), 0, 0);
  g.restore();
}

/** @param {import("../model/grid.js").AxisHead} axis */
const titleOf = (axis) => (axis.unit ? `${axis.label}, ${axis.unit}` : axis.label);

/** @param {CanvasRenderingContext2D} g @param {Inks} inks @param {Box} box */
export function frame(g, inks, box) {
  g.strokeStyle = inks.colour("rule-strong");
  g.lineWidth = 1;
  g.strokeRect(box.x + 0.5, box.y + 0.5, box.w - 1, box.h - 1);
}

/** @param {CanvasRenderingContext2D} g @param {string} text @param {number} width */
function fitting(g, text, width) {
  let t = text;
  while (t.length > 1 && g.measureText(t).width > width) t = t.slice(0, -1);
  return t === text ? t : `${t.slice(0, -1)}…`;
}
