// The whole span on one line a chamber. Drag the frame, or press where to go.

import { el } from "../base/dom.js";
import { seconds } from "../base/format.js";
import { clamp, tOf, xOf } from "../base/scale.js";
import { pan, shown } from "../model/view.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 */

const GUTTER = 76; // px, room for the names of the lines
const HEIGHT = 48;
const ROWS = { atrium: 11, ventricle: 27 };

/**
 * @param {HTMLElement} root
 * @param {Store} store
 */
export function overviewView(root, store) {
  const canvas = el("canvas", {
    tabIndex: 0, role: "slider", "aria-label": "Part of the strip that is shown",
    "aria-valuemin": "0", onkeydown: keys, onpointerdown: grab, onpointermove: drag, onpointerup: drop, onpointercancel: drop,
  });
  root.append(canvas);
  const g = /** @type {CanvasRenderingContext2D} */ (canvas.getContext("2d"));
  let held = false;
  let offset = 0;
  let width = 0;
  // Read once a sheet and a size: asking in every frame would lay the page out twice.
  let look = { family: "", ink: /** @type {Record<string, string>} */ ({}) };

  function readLook() {
    const style = getComputedStyle(root);
    const ink = Object.fromEntries(["wash", "device", "atrium", "ventricle", "alarm", "ink-soft", "rule-strong", "paper"].map((n) => [n, style.getPropertyValue(`--${n}`).trim()]));
    look = { family: style.fontFamily, ink };
  }

  function scale() {
    const span = store.get().answer?.span_ms ?? 1;
    return { t0: 0, x0: GUTTER, pxPerMs: (width - GUTTER - 8) / span };
  }

  /** @param {PointerEvent} e */
  function at(e) {
    return tOf(scale(), e.clientX - canvas.getBoundingClientRect().left);
  }

  /** @param {number} t0_ms */
  function go(t0_ms) {
    const { view, answer } = store.get();
    if (answer) store.set({ view: pan({ ...view, t0_ms }, 0, answer.span_ms) });
  }

  /** @param {PointerEvent} e */
  function grab(e) {
    const { view } = store.get();
    const w = shown(view);
    const t = at(e);
    canvas.setPointerCapture(e.pointerId);
    held = true;
    offset = t >= view.t0_ms && t <= view.t0_ms + w ? t - view.t0_ms : w / 2;
    go(t - offset);
  }

  /** @param {PointerEvent} e */
  function drag(e) {
    if (held) go(at(e) - offset);
  }

  function drop() {
    held = false;
  }

  /** @param {KeyboardEvent} e */
  function keys(e) {
    const { view } = store.get();
    const w = shown(view);
    /** @type {Record<string, number>} */
    const to = { ArrowLeft: view.t0_ms - w / 4, ArrowRight: view.t0_ms + w / 4, PageUp: view.t0_ms - w, PageDown: view.t0_ms + w, Home: 0, End: Infinity };
    if (!(e.key in to)) return;
    e.preventDefault();
    go(Math.min(to[e.key], store.get().answer?.span_ms ?? 0));
  }

  function draw() {
    const { answer, view } = store.get();
    if (!answer || width === 0) return;
    const dpr = window.devicePixelRatio || 1;
    if (canvas.width !== Math.round(width * dpr)) {
      canvas.width = Math.round(width * dpr);
      canvas.height = HEIGHT * dpr;
    }
    g.setTransform(dpr, 0, 0, dpr, 0, 0);
    g.clearRect(0, 0, width, HEIGHT);
    const colour = (/** @type {string} */ name) => look.ink[name];
    const s = scale();
    const right = width - 8;

    const x0 = xOf(s, view.t0_ms);
    const x1 = Math.min(right, xOf(s, view.t0_ms + shown(view)));
    g.fillStyle = colour("wash");
    g.fillRect(x0, 1, x1 - x0, HEIGHT - 15);
    g.fillStyle = colour("device");
    g.fillRect(x0, 1, 1.5, HEIGHT - 15);
    g.fillRect(x1 - 1.5, 1, 1.5, HEIGHT - 15);

    g.font = `12px ${look.family}`;
    g.textBaseline = "middle";
    const { overview } = answer;
    const lost = new Set(overview.lost);
    line("atria", ROWS.atrium, colour("atrium"), overview.atrium);
    line("ventricles", ROWS.ventricle, colour("ventricle"), overview.ventricle);
    paced(ROWS.atrium, overview.paced_atrium);
    paced(ROWS.ventricle, overview.paced_ventricle);
    g.fillStyle = colour("alarm");
    for (const t of overview.blocks) flag(xOf(s, t), 19);
    g.strokeStyle = colour("device");
    for (const t of overview.stimuli) ring(xOf(s, t), 19);
    ticks(colour("ink-soft"), colour("rule-strong"));

    /**
     * @param {string} name
     * @param {number} y
     * @param {string} ink
     * @param {number[]} times
     */
    function line(name, y, ink, times) {
      g.textAlign = "right";
      g.fillStyle = colour("ink-soft");
      g.fillText(name, GUTTER - 10, y);
      g.fillStyle = colour("rule-strong");
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
     * @param {number} y
     * @param {number[]} times
     */
    function paced(y, times) {
      const room = (times.length > 1 ? xOf(s, times[times.length - 1]) - xOf(s, times[0]) : Infinity) / Math.max(1, times.length - 1);
      for (const t of times) {
        const x = xOf(s, t);
        g.fillStyle = g.strokeStyle = colour("device");
        if (room < 7) {
          g.fillRect(x - 0.75, y + 2, 1.5, lost.has(t) ? 1.5 : 4);
          continue;
        }
        g.beginPath();
        g.arc(x, y, 2.8, 0, 2 * Math.PI);
        if (lost.has(t)) g.fillStyle = colour("paper");
        g.fill();
        g.stroke();
      }
    }

    /** @param {number} x @param {number} y */
    function flag(x, y) {
      g.beginPath();
      g.moveTo(x - 3.5, y - 3);
      g.lineTo(x + 3.5, y - 3);
      g.lineTo(x, y + 3);
      g.fill();
    }

    /** @param {number} x @param {number} y */
    function ring(x, y) {
      g.beginPath();
      g.arc(x, y, 2.4, 0, 2 * Math.PI);
      g.stroke();
    }

    /** @param {string} ink @param {string} rule */
    function ticks(ink, rule) {
      const step = [1, 2, 5, 10, 20, 30, 60, 120, 300, 600, 1800, 3600].find((n) => n * 1000 * s.pxPerMs >= 44) ?? 7200;
      g.textAlign = "center";
      for (let k = 0; k * step * 1000 <= (answer?.span_ms ?? 0); k++) {
        const x = xOf(s, k * step * 1000);
        g.fillStyle = rule;
        g.fillRect(x, HEIGHT - 14, 1, 4);
        g.fillStyle = ink;
        g.fillText(`${k * step}${k === 0 ? " s" : ""}`, clamp(x, s.x0 + 6, right - 8), HEIGHT - 5);
      }
    }
  }

  const watch = new ResizeObserver(() => {
    width = canvas.clientWidth;
    draw();
  });
  watch.observe(root);

  return {
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (changed.has("dark")) readLook();
      if (!["answer", "view", "dark"].some((k) => changed.has(k)) || !state.answer) return;
      draw();
      canvas.setAttribute("aria-valuemax", String(Math.round(state.answer.span_ms)));
      canvas.setAttribute("aria-valuenow", String(Math.round(state.view.t0_ms)));
      canvas.setAttribute("aria-valuetext", `${seconds(state.view.t0_ms)} to ${seconds(Math.min(state.answer.span_ms, state.view.t0_ms + shown(state.view)))}`);
    },
    destroy() {
      watch.disconnect();
      canvas.remove();
    },
  };
}
