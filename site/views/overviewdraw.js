// Paints the overview: every beat while there is room for each, rates beyond that.

import { clamp, xOf } from "../base/scale.js";

/**
 * @typedef {import("../base/scale.js").TimeScale} TimeScale
 * @typedef {import("../engine/wire.js").Answer} Answer
 * @typedef {import("../engine/wire.js").Rates} Rates
 * @typedef {import("../engine/wire.js").Spot} Spot
 * @typedef {import("../engine/wire.js").Trend} Trend
 * @typedef {{family: string, ink: Record<string, string>}} Look
 * @typedef {CanvasRenderingContext2D} Context
 */

export const HEIGHT = 66;
const FLAGS = 8; // y of the flags
const ROWS = { atrium: 25, ventricle: 42 }; // y of the lines
const BETWEEN = 33.5; // y of blocks and planned stimuli
const HALF = 8.5; // of a row of rates

/**
 * @param {Context} g one unit is one CSS pixel
 * @param {Answer} answer
 * @param {TimeScale} s
 * @param {number} right px
 * @param {Look} look
 */
export function drawStrip(g, answer, s, right, look) {
  const { overview } = answer;
  g.font = `12px ${look.family}`;
  g.textBaseline = "middle";
  names(g, s, look);
  if (overview.trend) {
    trend(g, overview.trend, s, right, look);
  } else {
    const lost = new Set(overview.lost);
    line(g, ROWS.atrium, look.ink.atrium, overview.atrium, s, right, look);
    line(g, ROWS.ventricle, look.ink.ventricle, overview.ventricle, s, right, look);
    paced(g, ROWS.atrium, overview.paced_atrium, lost, s, look);
    paced(g, ROWS.ventricle, overview.paced_ventricle, lost, s, look);
    g.fillStyle = look.ink.alarm;
    for (const t of overview.blocks) triangle(g, xOf(s, t), BETWEEN, 3.5);
  }
  g.strokeStyle = look.ink.device;
  g.lineWidth = 1;
  for (const t of overview.stimuli) {
    g.beginPath();
    g.arc(xOf(s, t), BETWEEN, 2.4, 0, 2 * Math.PI);
    g.stroke();
  }
  ticks(g, answer.span_ms, s, right, look);
}

/** @param {Context} g @param {TimeScale} s @param {Look} look */
function names(g, s, look) {
  g.textAlign = "right";
  g.fillStyle = look.ink["ink-soft"];
  g.fillText("atria", s.x0 - 34, ROWS.atrium);
  g.fillText("ventricles", s.x0 - 10, ROWS.ventricle);
}

/**
 * @param {Context} g
 * @param {number} y
 * @param {string} ink
 * @param {number[]} times
 * @param {TimeScale} s
 * @param {number} right
 * @param {Look} look
 */
function line(g, y, ink, times, s, right, look) {
  g.fillStyle = look.ink["rule-strong"];
  g.fillRect(s.x0, y, right - s.x0, 1);
  g.fillStyle = ink;
  let last = -10;
  for (const t of times) {
    const x = xOf(s, t);
    if (x - last < 0.6) continue; // denser than the screen shows
    last = x;
    g.fillRect(x - 0.75, y - 5, 1.5, 10);
  }
}

/**
 * The device's stimuli as discs on the line of their chamber, open where they did
 * not capture; where they stand too close for that, a band below the line.
 * @param {Context} g
 * @param {number} y
 * @param {number[]} times
 * @param {Set<number>} lost
 * @param {TimeScale} s
 * @param {Look} look
 */
function paced(g, y, times, lost, s, look) {
  const room = (times.length > 1 ? xOf(s, times[times.length - 1]) - xOf(s, times[0]) : Infinity) / Math.max(1, times.length - 1);
  for (const t of times) {
    const x = xOf(s, t);
    g.fillStyle = g.strokeStyle = look.ink.device;
    if (room < 7) {
      g.fillRect(x - 0.75, y + 2, 1.5, lost.has(t) ? 1.5 : 4);
      continue;
    }
    g.beginPath();
    g.arc(x, y, 2.8, 0, 2 * Math.PI);
    if (lost.has(t)) g.fillStyle = look.ink.paper;
    g.fill();
    g.stroke();
  }
}

/**
 * Both chambers' rates on one scale: a band from the slowest to the fastest of each
 * part, a line at the mean, and along the foot how much of it was paced.
 * @param {Context} g
 * @param {Trend} t
 * @param {TimeScale} s
 * @param {number} right
 * @param {Look} look
 */
function trend(g, t, s, right, look) {
  const fastest = [...t.atrium.mean, ...t.ventricle.mean].reduce((a, b) => Math.max(a, b), 0);
  const top = Math.max(100, Math.ceil(fastest / 50) * 50);
  const step = t.step_ms * s.pxPerMs;
  for (const [y, ink, r] of /** @type {[number, string, Rates][]} */ ([[ROWS.atrium, look.ink.atrium, t.atrium], [ROWS.ventricle, look.ink.ventricle, t.ventricle]])) {
    const foot = y + HALF - 1;
    const at = (/** @type {number} */ bpm) => foot - (2 * HALF - 2) * Math.min(1, bpm / top);
    g.fillStyle = look.ink.rule;
    g.fillRect(s.x0, Math.round(at(top)), right - s.x0, 1);
    g.fillStyle = look.ink["rule-strong"];
    g.fillRect(s.x0, Math.round(foot), right - s.x0, 1);
    g.fillStyle = ink;
    g.globalAlpha = 0.3;
    r.mean.forEach((m, i) => {
      if (m > 0) g.fillRect(s.x0 + i * step, at(r.most[i]), Math.max(step, 1), Math.max(1, at(r.least[i]) - at(r.most[i])));
    });
    g.globalAlpha = 1;
    r.mean.forEach((m, i) => {
      if (m > 0) g.fillRect(s.x0 + i * step, at(m) - 0.75, Math.max(step, 1), 1.5);
    });
    g.fillStyle = look.ink.device;
    r.paced.forEach((p, i) => {
      if (p > 0) g.fillRect(s.x0 + i * step, foot - 3 * (p / 100), Math.max(step, 1), 3 * (p / 100) + 1);
    });
  }
  g.fillStyle = look.ink.alarm;
  const most = Math.max(1, ...t.blocks);
  t.blocks.forEach((n, i) => {
    if (n > 0) g.fillRect(s.x0 + i * step, BETWEEN - 1 - (2 * n) / most, Math.max(step, 1), 2 + (2 * n) / most);
  });
  g.textAlign = "right";
  g.fillStyle = look.ink["ink-soft"];
  g.font = `10px ${look.family}`;
  g.fillText(`${top}`, s.x0 - 4, ROWS.atrium - 5);
  g.fillText("/min", s.x0 - 4, ROWS.atrium + 5);
  g.font = `12px ${look.family}`;
}

/**
 * Flags above the lines, each sort by its own shape: a triangle for a block, a bar for
 * a pause, a lozenge for a premature beat, a square for the device, a disc for rhythm.
 * @param {Context} g
 * @param {Spot[]} flags
 * @param {TimeScale} s
 * @param {Look} look
 */
export function drawFlags(g, flags, s, look) {
  /** @type {Record<string, number>} */
  const last = {};
  for (const f of flags) {
    const x = xOf(s, f.t_ms);
    if (x - (last[f.shape] ?? -99) < 5) continue; // one on another says no more
    last[f.shape] = x;
    g.fillStyle = { block: look.ink.alarm, pause: look.ink.alarm, premature: look.ink.ink, device: look.ink.device, rhythm: look.ink.his }[f.shape];
    const wide = xOf(s, f.until_ms) - x;
    if (wide > 8) { // how long it holds
      g.globalAlpha = 0.45;
      g.fillRect(x, FLAGS + 4.5, wide, 1.5);
      g.globalAlpha = 1;
    }
    if (f.shape === "block") triangle(g, x, FLAGS, 4.5);
    else if (f.shape === "pause") g.fillRect(x - 4.5, FLAGS - 2, 9, 4);
    else if (f.shape === "device") g.fillRect(x - 3.5, FLAGS - 3.5, 7, 7);
    else if (f.shape === "premature") {
      g.beginPath();
      g.moveTo(x, FLAGS - 5);
      g.lineTo(x + 4, FLAGS);
      g.lineTo(x, FLAGS + 5);
      g.lineTo(x - 4, FLAGS);
      g.fill();
    } else {
      g.beginPath();
      g.arc(x, FLAGS, 3.8, 0, 2 * Math.PI);
      g.fill();
    }
  }
}

/** @param {Context} g @param {number} x @param {number} y @param {number} half */
function triangle(g, x, y, half) {
  g.beginPath();
  g.moveTo(x - half, y - 0.85 * half);
  g.lineTo(x + half, y - 0.85 * half);
  g.lineTo(x, y + 0.85 * half);
  g.fill();
}

/** Steps of the axis in seconds, the unit in which their labels count, and its name. @type {[number[], number, string][]} */
const STEPS = [
  [[1, 2, 5, 10, 20, 30], 1, "s"],
  [[60, 120, 300, 600, 900, 1800], 60, "min"],
  [[3600, 7200, 10800, 21600], 3600, "h"],
];

/**
 * @param {Context} g
 * @param {number} span ms
 * @param {TimeScale} s
 * @param {number} right
 * @param {Look} look
 */
function ticks(g, span, s, right, look) {
  const all = STEPS.flatMap(([list, unit, name]) => list.map((step) => ({ step, unit, name })));
  const { step, unit, name } = all.find((n) => n.step * 1000 * s.pxPerMs >= 44) ?? all[all.length - 1];
  g.textAlign = "center";
  for (let k = 0; k * step * 1000 <= span; k++) {
    const x = xOf(s, k * step * 1000);
    g.fillStyle = look.ink["rule-strong"];
    g.fillRect(x, HEIGHT - 14, 1, 4);
    g.fillStyle = look.ink["ink-soft"];
    g.fillText(`${(k * step) / unit}${k === 0 ? ` ${name}` : ""}`, clamp(x, s.x0 + 6, right - 8), HEIGHT - 5);
  }
}
