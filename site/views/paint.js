// Puts a scene on a canvas. It decides nothing: places come from the scene,
// looks from the engine's styles.

import { DISC, LINE, POLY, RECT, RING, TEXT } from "../engine/scene.js";

/**
 * @typedef {import("../engine/scene.js").Scene} Scene
 * @typedef {import("../engine/scene.js").Mark} Mark
 * @typedef {import("../engine/wire.js").Style} Style
 * @typedef {import("../engine/wire.js").Styles} Styles
 */

/** @type {CanvasTextAlign[]} */
const ALIGN = ["left", "center", "right"];

/**
 * @param {CanvasRenderingContext2D} g already scaled so that one unit is one millimetre
 * @param {Scene} scene
 * @param {Styles} styles
 * @param {string} family of fonts
 * @param {{hairMM: number}} device thinnest line that shows
 */
export function paint(g, scene, styles, family, device) {
  let cls = "";
  /** @type {Style | undefined} */
  let style;
  for (const m of scene.marks) {
    if (m.cls !== cls) {
      cls = m.cls;
      style = styles.classes[cls];
      if (style) dress(g, style, scene, family, device);
    }
    if (style) put(g, m, style, scene);
  }
}

/**
 * Puts a halo behind the marks of events, in the look of a selected one. It comes
 * before the marks themselves.
 * @param {CanvasRenderingContext2D} g
 * @param {Scene} scene
 * @param {Styles} styles
 * @param {Set<number>} events
 */
export function halo(g, scene, styles, events) {
  const { stroke, width } = styles.classes.selected ?? {};
  if (!stroke || events.size === 0) return;
  g.strokeStyle = g.fillStyle = stroke;
  g.lineWidth = width ?? 2;
  g.lineCap = "round";
  g.setLineDash([]);
  for (const m of scene.marks) {
    if (!events.has(m.event) || m.cls.startsWith("dim")) continue;
    if (m.shape === RECT) {
      g.globalAlpha = 0.5;
      g.fillRect(m.x, m.y, m.x2 - m.x, m.y2 - m.y);
      g.globalAlpha = 1;
    } else if (m.shape === LINE) {
      g.beginPath();
      g.moveTo(m.x, m.y);
      g.lineTo(m.x2, m.y2);
      g.stroke();
    } else if (m.shape === DISC || m.shape === RING) {
      g.beginPath();
      g.arc(m.x, m.y, m.r + 0.9, 0, 2 * Math.PI);
      g.fill();
    }
  }
}

/**
 * Covers the sheet from a place on to the right; grid and time axis stay.
 * @param {CanvasRenderingContext2D} g
 * @param {Scene} scene
 * @param {Styles} styles
 * @param {string} family
 * @param {{hairMM: number, from: number}} device
 */
export function cover(g, scene, styles, family, device) {
  const from = Math.max(device.from, scene.axis.x0);
  if (from >= scene.width) return;
  g.fillStyle = styles.paper;
  g.fillRect(from, 0, scene.width - from, scene.height);
  g.save();
  g.beginPath();
  g.rect(from, 0, scene.width - from, scene.height);
  g.clip();
  paint(g, { ...scene, marks: scene.marks.filter((m) => m.cls.startsWith("grid") || m.cls.startsWith("axis")) }, styles, family, device);
  g.restore();
  g.strokeStyle = styles.device;
  g.lineWidth = 0.7;
  g.setLineDash([]);
  g.beginPath();
  g.moveTo(from, 0);
  g.lineTo(from, scene.height);
  g.stroke();
}

/** How far an outline stands off, in millimetres, by the class it is drawn around. @type {Record<string, number>} */
const AROUND = { block: 0.9, window: 0.3, "window-edge": 0.3 };

/**
 * Draws an outline around the blocks and the windows among some events: a halo behind
 * a short bar or a filled one hardly shows.
 * @param {CanvasRenderingContext2D} g
 * @param {Scene} scene
 * @param {Styles} styles
 * @param {Set<number>} events
 */
export function outline(g, scene, styles, events) {
  g.strokeStyle = styles.device;
  g.lineWidth = 0.4;
  g.setLineDash([]);
  for (const m of scene.marks) {
    const off = AROUND[m.cls];
    if (off === undefined || m.event === 0 || !events.has(m.event)) continue;
    const { x0, y0, x1, y1 } = box(m, scene);
    g.beginPath();
    g.roundRect(x0 - off, y0 - off, x1 - x0 + 2 * off, y1 - y0 + 2 * off, off);
    g.stroke();
  }
}

/** @param {Mark} m @param {Scene} scene */
function box(m, scene) {
  const at = m.shape === POLY ? [...scene.points.subarray(m.from, m.from + 2 * m.count)] : [m.x, m.y, m.x2, m.y2];
  const xs = at.filter((_, i) => i % 2 === 0);
  const ys = at.filter((_, i) => i % 2 === 1);
  return { x0: Math.min(...xs), y0: Math.min(...ys), x1: Math.max(...xs), y1: Math.max(...ys) };
}

/**
 * @param {CanvasRenderingContext2D} g
 * @param {Style} style
 * @param {Scene} scene
 * @param {string} family
 * @param {{hairMM: number}} device
 */
function dress(g, style, scene, family, device) {
  if (style.stroke) {
    g.strokeStyle = style.stroke;
    g.lineWidth = Math.max(style.width ?? 0, device.hairMM);
    g.setLineDash(style.dash ?? []);
  }
  if (style.fill) g.fillStyle = style.fill;
  if (style.size) g.font = `${style.weight ?? 400} ${style.size * scene.font_mm}px ${family}`;
  g.lineCap = style.dash ? "butt" : "round";
  g.lineJoin = "round";
}

/**
 * @param {CanvasRenderingContext2D} g
 * @param {Mark} m
 * @param {Style} style
 * @param {Scene} scene
 */
function put(g, m, style, scene) {
  switch (m.shape) {
    case LINE:
      if (!style.stroke) return;
      g.beginPath();
      g.moveTo(m.x, m.y);
      g.lineTo(m.x2, m.y2);
      g.stroke();
      return;
    case POLY:
      if (!style.stroke || m.count === 0) return;
      g.beginPath();
      for (let i = 0, p = m.from; i < m.count; i++, p += 2) {
        g.lineTo(scene.points[p], scene.points[p + 1]);
      }
      g.stroke();
      return;
    case RECT:
      if (style.fill) g.fillRect(m.x, m.y, m.x2 - m.x, m.y2 - m.y);
      return;
    case DISC:
    case RING:
      g.beginPath();
      g.arc(m.x, m.y, m.r, 0, 2 * Math.PI);
      if (m.shape === DISC && style.fill) g.fill();
      if (m.shape === RING && style.stroke) g.stroke();
      return;
    case TEXT:
      if (!style.fill || !style.size) return;
      g.textAlign = ALIGN[m.anchor];
      g.fillText(m.text, m.x, m.y);
  }
}
