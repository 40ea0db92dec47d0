// The chart of a map with its cursor: pointer and keys go from point to point.

import { el } from "../base/dom.js";
import { clamp } from "../base/scale.js";
import { inksOfSheet } from "./inks.js";
import { boxOf, paintMap } from "./mapchart.js";
import { lineHeight, paintLine } from "./mapline.js";

/**
 * @typedef {import("../model/grid.js").Grid} Grid
 * @typedef {import("../engine/sweeper.js").Run} Run
 * @typedef {import("./mapchart.js").Sorts} Sorts
 */

/** @typedef {ReturnType<typeof mapPlot>} MapPlot */

/**
 * @param {{move: (point: number, byKey: boolean) => void, open: (point: number) => void, key: (key: string) => boolean}} on
 */
export function mapPlot(on) {
  const canvas = el("canvas", null);
  const cursor = el("div", { class: "map-cursor", hidden: true });
  const kept = el("div", { class: "map-cursor kept", hidden: true });
  const node = el("div", {
    class: "map-plot", id: "map-plot", tabIndex: 0, role: "application",
    "aria-label": "Map. Arrow keys move from point to point and say what comes of it, Enter opens the strip, A keeps the point to compare.",
    "aria-roledescription": "map", onkeydown: keys,
  }, canvas, cursor, kept);
  canvas.addEventListener("pointermove", (e) => {
    const p = pointAt(e);
    if (p >= 0 && p !== point && e.pointerType !== "touch") on.move(p, false);
  });
  canvas.addEventListener("click", (e) => {
    const p = pointAt(e);
    if (p < 0) return;
    const touch = /** @type {PointerEvent} */ (e).pointerType === "touch";
    if (touch && p !== point) on.move(p, false); // the second tap opens
    else on.open(p);
  });

  let run = /** @type {Run | null} */ (null);
  let point = 0;
  let height = 0;

  /** @returns {Grid | null} */
  const grid = () => run?.grid ?? null;
  /** @param {Grid} g */
  const box = (g) => boxOf(g, node.clientWidth, height);

  /** @param {PointerEvent | MouseEvent} e */
  function pointAt(e) {
    const g = grid();
    if (!g) return -1;
    const at = canvas.getBoundingClientRect();
    const b = box(g);
    const i = Math.floor(((e.clientX - at.left - b.x) / b.w) * g.nx);
    const j = g.ny === 1 ? 0 : Math.floor(((b.y + b.h - (e.clientY - at.top)) / b.h) * g.ny);
    return i < 0 || j < 0 || i >= g.nx || j >= g.ny ? -1 : j * g.nx + i;
  }

  /** @param {KeyboardEvent} e */
  function keys(e) {
    const g = grid();
    if (!g || e.ctrlKey || e.metaKey || e.altKey) return;
    const by = e.shiftKey ? 10 : 1;
    const x = point % g.nx;
    const y = Math.floor(point / g.nx);
    const to = (/** @type {number} */ i, /** @type {number} */ j) => on.move(clamp(j, 0, g.ny - 1) * g.nx + clamp(i, 0, g.nx - 1), true);
    /** @type {Record<string, () => void>} */
    const acts = {
      ArrowLeft: () => to(x - by, y),
      ArrowRight: () => to(x + by, y),
      ArrowUp: () => to(x, y + by),
      ArrowDown: () => to(x, y - by),
      Home: () => to(0, y),
      End: () => to(g.nx - 1, y),
      PageUp: () => to(x, g.ny - 1),
      PageDown: () => to(x, 0),
      Enter: () => on.open(point),
    };
    const act = acts[e.key];
    if (!act && !on.key(e.key.toLowerCase())) return;
    e.preventDefault();
    e.stopPropagation();
    act?.();
  }

  /** @param {HTMLElement} mark @param {number} p */
  function place(mark, p) {
    const g = grid();
    mark.hidden = !g || p < 0 || p >= g.of;
    if (!g || mark.hidden) return;
    const b = box(g);
    const [cw, ch] = [b.w / g.nx, b.h / g.ny];
    const [w, h] = [g.head.y ? Math.max(cw, 5) : 5, Math.max(ch, 5)];
    mark.style.width = `${w}px`;
    mark.style.height = `${h}px`;
    mark.style.transform = `translate(${b.x + ((p % g.nx) + 0.5) * cw - w / 2}px, ${b.y + b.h - (Math.floor(p / g.nx) + 0.5) * ch - h / 2}px)`;
  }

  return {
    node,
    /** Whether there is room to paint. */
    visible: () => node.clientWidth > 0,

    /** @param {Run} r @param {Sorts} sorts @param {string} outcome */
    paint(r, sorts, outcome) {
      run = r;
      const g = r.grid;
      const width = node.clientWidth;
      if (!g || width === 0) return;
      const line = g.head.y === null;
      height = line ? lineHeight(g) : clamp(width * 0.62, 260, Math.max(280, window.innerHeight * 0.52));
      const ratio = devicePixelRatio || 1;
      const [w, h] = [Math.round(width * ratio), Math.round(height * ratio)];
      if (canvas.width !== w || canvas.height !== h) { // it costs as much as a picture
        canvas.width = w;
        canvas.height = h;
        canvas.style.width = `${width}px`;
        canvas.style.height = `${height}px`;
      }
      const c = /** @type {CanvasRenderingContext2D} */ (canvas.getContext("2d"));
      c.setTransform(ratio, 0, 0, ratio, 0, 0);
      c.clearRect(0, 0, width, height);
      c.font = `12px ${getComputedStyle(node).fontFamily}`;
      const inks = inksOfSheet();
      if (line) paintLine(c, inks, width, r);
      else paintMap(c, inks, box(g), r, sorts, outcome);
    },

    /** @param {number} p @param {number} keptPoint -1 for none */
    cursor(p, keptPoint) {
      point = p;
      place(cursor, p);
      place(kept, keptPoint);
    },
  };
}
