// The whole span on one line a chamber, or as rates where there are too many beats for
// that, with flags where the findings are. Drag the frame, or press where to go.

import { el, say } from "../base/dom.js";
import { seconds } from "../base/format.js";
import { tOf, xOf } from "../base/scale.js";
import { pan, reveal, shown } from "../model/view.js";
import { drawFlags, drawStrip, HEIGHT } from "./overviewdraw.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Spot} Spot
 */

const GUTTER = 76; // px, room for the names of the lines
const FLAG_ROW = 16; // px from the top in which a press goes to a flag
const FLAG_REACH = 12; // px

/**
 * @param {HTMLElement} root
 * @param {Store} store
 */
export function overviewView(root, store) {
  const canvas = el("canvas", {
    tabIndex: 0, role: "slider", "aria-label": "Part of the strip that is shown. N goes to the next finding.",
    "aria-valuemin": "0", onkeydown: keys, onpointerdown: grab, onpointermove: drag, onpointerup: drop, onpointercancel: drop,
  });
  const said = el("div", { class: "unseen", role: "status" });
  root.append(canvas, said);
  const g = /** @type {CanvasRenderingContext2D} */ (canvas.getContext("2d"));
  const still = document.createElement("canvas"); // what does not move with the view
  let held = false;
  let offset = 0;
  let width = 0;
  let at = -1; // the flag gone to last
  // Read once a sheet and a size: asking in every frame would lay the page out twice.
  let look = { family: "", ink: /** @type {Record<string, string>} */ ({}) };

  function readLook() {
    const style = getComputedStyle(root);
    const ink = Object.fromEntries(["wash", "device", "atrium", "ventricle", "his", "alarm", "ink", "ink-soft", "rule", "rule-strong", "paper"].map((n) => [n, style.getPropertyValue(`--${n}`).trim()]));
    look = { family: style.fontFamily, ink };
  }

  function scale() {
    const span = store.get().answer?.span_ms ?? 1;
    return { t0: 0, x0: GUTTER, pxPerMs: (width - GUTTER - 8) / span };
  }

  /** @param {PointerEvent} e */
  const instant = (e) => tOf(scale(), e.clientX - canvas.getBoundingClientRect().left);

  /** @param {number} t0_ms */
  function go(t0_ms) {
    const { view, answer } = store.get();
    if (answer) store.set({ view: pan({ ...view, t0_ms }, 0, answer.span_ms) });
  }

  /** The flag under a pointer, or -1. @param {PointerEvent} e */
  function flagAt(e) {
    const { answer } = store.get();
    const box = canvas.getBoundingClientRect();
    if (!answer || e.clientY - box.top > FLAG_ROW) return -1;
    const s = scale();
    let best = -1;
    let least = FLAG_REACH;
    answer.overview.flags.forEach((f, i) => {
      const d = Math.abs(xOf(s, f.t_ms) - (e.clientX - box.left));
      if (d < least) {
        least = d;
        best = i;
      }
    });
    return best;
  }

  /** @param {PointerEvent} e */
  function grab(e) {
    const flag = flagAt(e);
    if (flag >= 0) {
      visit(flag);
      return;
    }
    const { view } = store.get();
    const w = shown(view);
    const t = instant(e);
    canvas.setPointerCapture(e.pointerId);
    held = true;
    offset = t >= view.t0_ms && t <= view.t0_ms + w ? t - view.t0_ms : w / 2;
    go(t - offset);
  }

  /** @param {PointerEvent} e */
  function drag(e) {
    if (held) {
      go(instant(e) - offset);
      return;
    }
    const flag = flagAt(e);
    const text = flag >= 0 ? told(flag) : "";
    if (canvas.title !== text) canvas.title = text;
  }

  function drop() {
    held = false;
  }

  /** @param {number} i */
  function told(i) {
    const { answer } = store.get();
    const f = answer?.overview.flags[i];
    return f && answer ? `${seconds(f.t_ms)}: ${answer.findings[f.finding]?.text ?? ""}` : "";
  }

  /** Selects the event at which a finding shows. @param {number} i */
  function visit(i) {
    const { answer, view } = store.get();
    const f = answer?.overview.flags[i];
    if (!answer || !f) return;
    at = i;
    say(said, `${i + 1} of ${answer.overview.flags.length}: ${told(i)}`);
    store.set({ selected: f.event, lit: [], view: reveal(view, f.t_ms, answer.span_ms) });
  }

  /**
   * Goes to the next or, with Shift, the previous place of a finding.
   * @param {{shiftKey: boolean}} e
   * @param {number} [finding] only of this one
   */
  function jump(e, finding) {
    const { answer, selected, account, view } = store.get();
    if (!answer) return;
    const { flags } = answer.overview;
    const way = e.shiftKey ? -1 : 1;
    const fits = (/** @type {Spot} */ f) => finding === undefined || f.finding === finding;
    const here = flags[at]?.event === selected && selected !== 0 ? at : -1;
    const t = selected !== 0 && account?.event === selected ? account.t_ms : view.t0_ms - way;
    let i = here >= 0 ? here + way : way > 0 ? flags.findIndex((f) => f.t_ms > t) : flags.findLastIndex((f) => f.t_ms < t);
    while (i >= 0 && i < flags.length && !fits(flags[i])) i += way;
    if (i < 0 || i >= flags.length) {
      if (finding !== undefined) { // round to the first one again
        const first = flags.findIndex(fits);
        if (first >= 0) visit(first);
        return;
      }
      say(said, flags.length === 0 ? "No finding has a place of its own on this strip." : way > 0 ? "No later finding." : "No earlier finding.");
      return;
    }
    visit(i);
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

  /** Draws what the view does not move. */
  function prepare() {
    const { answer } = store.get();
    if (!answer || width === 0) return;
    const dpr = window.devicePixelRatio || 1;
    canvas.width = still.width = Math.round(width * dpr);
    canvas.height = still.height = Math.round(HEIGHT * dpr);
    const c = /** @type {CanvasRenderingContext2D} */ (still.getContext("2d"));
    c.setTransform(dpr, 0, 0, dpr, 0, 0);
    c.clearRect(0, 0, width, HEIGHT);
    drawStrip(c, answer, scale(), width - 8, look);
    drawFlags(c, answer.overview.flags, scale(), look);
  }

  function draw() {
    const { answer, view } = store.get();
    if (!answer || width === 0) return;
    const dpr = window.devicePixelRatio || 1;
    g.setTransform(dpr, 0, 0, dpr, 0, 0);
    g.clearRect(0, 0, width, HEIGHT);
    const s = scale();
    const x0 = xOf(s, view.t0_ms);
    const x1 = Math.min(width - 8, xOf(s, view.t0_ms + shown(view)));
    g.fillStyle = look.ink.wash;
    g.fillRect(x0, FLAG_ROW, x1 - x0, HEIGHT - 15 - FLAG_ROW);
    g.fillStyle = look.ink.device;
    g.fillRect(x0, FLAG_ROW, 1.5, HEIGHT - 15 - FLAG_ROW);
    g.fillRect(Math.max(x0, x1 - 1.5), FLAG_ROW, 1.5, HEIGHT - 15 - FLAG_ROW);
    g.setTransform(1, 0, 0, 1, 0, 0);
    g.drawImage(still, 0, 0);
  }

  const watch = new ResizeObserver(() => {
    width = canvas.clientWidth;
    prepare();
    draw();
  });
  watch.observe(root);

  return {
    jump,
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (changed.has("dark")) readLook();
      if (!["answer", "view", "dark"].some((k) => changed.has(k)) || !state.answer) return;
      if (changed.has("answer")) at = -1;
      if (changed.has("answer") || changed.has("dark")) prepare();
      draw();
      canvas.setAttribute("aria-valuemax", String(Math.round(state.answer.span_ms)));
      canvas.setAttribute("aria-valuenow", String(Math.round(state.view.t0_ms)));
      canvas.setAttribute("aria-valuetext", `${seconds(state.view.t0_ms)} to ${seconds(Math.min(state.answer.span_ms, state.view.t0_ms + shown(state.view)))}`);
    },
    destroy() {
      watch.disconnect();
      canvas.remove();
      said.remove();
    },
  };
}
