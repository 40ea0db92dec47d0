// Lines of equal value through the points of a grid. Holds no DOM.

import { nice, tidy } from "./sweep.js";

/** @typedef {[number, number][]} Line places in columns and rows of the grid */

/**
 * Round levels between the least and the greatest value, seven or fewer.
 * @param {number} low
 * @param {number} high
 * @returns {number[]}
 */
export function levels(low, high) {
  if (!(high > low)) return [];
  const step = nice((high - low) / 7);
  const out = [];
  for (let v = Math.ceil(low / step + 1e-9) * step; v < high - 1e-9 * step; v += step) out.push(tidy(v));
  return out;
}

/**
 * The lines of one level: between neighbouring points the value is taken to change
 * evenly; a square with a missing corner has none.
 * @param {number} nx
 * @param {number} ny
 * @param {(x: number, y: number) => number} value NaN for none
 * @param {number} level
 * @returns {Line[]}
 */
export function contour(nx, ny, value, level) {
  /** By the edge they cross: a horizontal one at 2(y nx + x), an upright one at the next. @type {Map<number, [number, number][]>} */
  const ends = new Map(); // edge → [other edge, segment]
  /** @type {Map<number, [number, number]>} */
  const at = new Map();
  let segments = 0;

  /** @param {number} a @param {number} b */
  function join(a, b) {
    for (const [from, to] of [[a, b], [b, a]]) ends.set(from, [...(ends.get(from) ?? []), [to, segments]]);
    segments++;
  }

  for (let y = 0; y + 1 < ny; y++) {
    for (let x = 0; x + 1 < nx; x++) {
      const c = [value(x, y), value(x + 1, y), value(x + 1, y + 1), value(x, y + 1)];
      if (c.some(Number.isNaN)) continue;
      const k = c.reduce((bits, v, i) => bits | (v >= level ? 1 << i : 0), 0);
      const edges = CASES[k];
      if (edges.length === 0) continue;
      const e = [2 * (y * nx + x), 2 * (y * nx + x + 1) + 1, 2 * ((y + 1) * nx + x), 2 * (y * nx + x) + 1];
      const u = (/** @type {number} */ a, /** @type {number} */ b) => (level - a) / (b - a);
      for (const i of edges.flat()) {
        at.set(e[i], i === 0 ? [x + u(c[0], c[1]), y] : i === 1 ? [x + 1, y + u(c[1], c[2])] : i === 2 ? [x + u(c[3], c[2]), y + 1] : [x, y + u(c[0], c[3])]);
      }
      for (const [a, b] of edges) join(e[a], e[b]);
    }
  }
  return lines(ends, at);
}

/** Which edges of a square a line joins, by which corners are above: edges 0 top, 1 right, 2 bottom, 3 left. @type {[number, number][][]} */
const CASES = [
  [], [[3, 0]], [[0, 1]], [[3, 1]], [[1, 2]], [[3, 2], [0, 1]], [[0, 2]], [[3, 2]],
  [[2, 3]], [[0, 2]], [[0, 3], [1, 2]], [[1, 2]], [[1, 3]], [[0, 1]], [[0, 3]], [],
];

/**
 * @param {Map<number, [number, number][]>} ends
 * @param {Map<number, [number, number]>} at
 * @returns {Line[]}
 */
function lines(ends, at) {
  const used = new Set();
  /** @type {Line[]} */
  const out = [];
  const starts = [...ends.keys()].sort((a, b) => (ends.get(a)?.length ?? 0) - (ends.get(b)?.length ?? 0) || a - b); // open ends first
  for (const start of starts) {
    let here = start;
    /** @type {Line} */
    const line = [];
    for (;;) {
      const way = ends.get(here)?.find(([, s]) => !used.has(s));
      if (!way) break;
      if (line.length === 0) line.push(/** @type {[number, number]} */ (at.get(here)));
      used.add(way[1]);
      here = way[0];
      line.push(/** @type {[number, number]} */ (at.get(here)));
    }
    if (line.length > 1) out.push(line);
  }
  return out;
}
