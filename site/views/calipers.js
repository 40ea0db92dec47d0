// Calipers on the sheet: two legs and a bar between them, laid over the drawing, so
// that moving them asks nothing of the engine.

import { el, fill, say } from "../base/dom.js";
import { whenQuiet } from "../base/frame.js";
import { num, seconds } from "../base/format.js";
import { clamp, PX_PER_MM } from "../base/scale.js";
import { placeOf, timeAt } from "../engine/scene.js";
import { firstPlaces, marched, NO_CALIPERS, nextInstant, readings, snapped } from "../model/calipers.js";
import { reveal, shown } from "../model/view.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../model/calipers.js").Calipers} Calipers
 */

const SNAP_PX = 7;
const CLOSEST_PX = 5; // legs that are marched out stand at least so far apart
const COUNT_PX = 26; // and are numbered from here on
const MOST_PINS = 12;

/**
 * @param {Store} store
 */
export function calipersView(store) {
  const tool = el("button", { type: "button", id: "calipers", "aria-pressed": "false", title: "M: measure intervals on the sheet", onclick: toggle }, "Calipers");
  const legs = [leg("a_ms", "First leg"), leg("b_ms", "Second leg")];
  const bar = handle("caliper-bar", "Both legs", { "aria-label": "Both legs of the calipers" });
  const levels = [level("y0_mm", "Upper level"), level("y1_mm", "Lower level")];
  const text = el("span", { class: "caliper-text" });
  const march = el("button", { type: "button", "aria-pressed": "false", title: "Repeat the interval along the strip", onclick: () => change({ march: !now().march }) }, "March");
  const pin = el("button", { type: "button", title: "Keep this pair and go on with another", onclick: keepPair }, "Pin");
  const volt = el("button", { type: "button", "aria-pressed": "false", title: "Measure a height too", onclick: measureHeight }, "mV");
  const off = el("button", { type: "button", "aria-label": "Calipers off", onclick: toggle }, "×");
  const read = el("div", { class: "caliper-read" }, text, march, pin, volt, off);
  const faint = el("div", { class: "caliper-march", "aria-hidden": "true" });
  const pinned = el("div", { class: "caliper-pins" });
  const said = el("div", { class: "unseen", role: "status" });
  const over = el("div", { class: "calipers", hidden: true }, faint, pinned, bar, legs, levels, read, said);
  const announce = whenQuiet(400, () => say(said, store.get().calipers.on ? `${spoken()}.` : ""));

  const now = () => store.get().calipers;
  /** @param {Partial<Calipers>} patch @param {string} [name] */
  const change = (patch, name = "") => store.change({ calipers: { ...now(), ...patch } }, name);

  function toggle() {
    const { calipers, answer, view } = store.get();
    if (calipers.on || !answer) {
      const inside = over.contains(document.activeElement);
      change({ on: false });
      if (inside) document.getElementById("timeline")?.focus();
      return;
    }
    const seen = [calipers.a_ms, calipers.b_ms].every((t) => t >= view.t0_ms && t <= view.t0_ms + shown(view));
    const places = seen && calipers.a_ms !== calipers.b_ms ? {} : firstPlaces(answer.overview.ventricle, view.t0_ms, Math.min(shown(view), answer.span_ms));
    change({ ...places, on: true });
    requestAnimationFrame(() => legs[1].focus({ preventScroll: true }));
  }

  function keepPair() {
    const { a_ms, b_ms, pins } = now();
    change({ pins: [...pins, { a_ms, b_ms }].slice(-MOST_PINS) });
  }

  /** Puts two heights about the tallest deflection's room in the first lane. */
  function measureHeight() {
    const { scene } = store.get();
    const lane = scene?.lanes.find((l) => /^(lead|egm):/.test(l.name)) ?? scene?.lanes[0];
    if (!lane) return;
    const third = (lane.y1 - lane.y0) / 3;
    change({ level: now().level ? null : { y0_mm: lane.y0 + third, y1_mm: lane.y1 - third } });
  }

  /** What has a handle: a slider by the keyboard, and something to drag. @param {string} cls @param {string} label @param {Record<string, any>} more */
  function handle(cls, label, more = {}) {
    return el("div", { class: cls, role: "slider", tabIndex: 0, "aria-label": label, ...more }, el("span", { class: "knob" }));
  }

  /** @param {"a_ms" | "b_ms"} which @param {string} label */
  function leg(which, label) {
    const node = handle("caliper-leg", `${label} of the calipers`, { "data-leg": which });
    drag(node, (e, from) => {
      const { scene, answer } = store.get();
      if (!scene || !answer) return;
      const t = clamp(timeAt(scene, from.mm + (e.clientX - from.x) / PX_PER_MM), 0, answer.span_ms);
      change({ [which]: e.altKey ? t : snapTo(t, e.clientY) }, `caliper ${which}`);
    }, () => place(now()[which]));
    node.addEventListener("keydown", (e) => keys(e, (by, way) => {
      const t = by ?? now()[which];
      moveTo(which, t, way);
    }, which));
    return node;
  }

  /** @param {"y0_mm" | "y1_mm"} which @param {string} label */
  function level(which, label) {
    const node = handle("caliper-level", `${label} of the calipers`, { "aria-orientation": "vertical" });
    /** @param {number} mm */
    const to = (mm) => {
      const { scene } = store.get();
      const { level: l } = now();
      if (scene && l) change({ level: { ...l, [which]: clamp(mm, 0, scene.height) } }, `caliper ${which}`);
    };
    drag(node, (e, from) => to(from.mm + (e.clientY - from.y) / PX_PER_MM), () => now().level?.[which] ?? 0);
    node.addEventListener("keydown", (e) => {
      const step = e.shiftKey ? 0.1 : 0.5;
      const way = e.key === "ArrowUp" ? -1 : e.key === "ArrowDown" ? 1 : 0;
      if (e.key === "Escape") toggle();
      if (way !== 0) to((now().level?.[which] ?? 0) + way * step);
      if (way !== 0 || e.key === "Escape") {
        e.preventDefault();
        e.stopPropagation();
      }
    });
    return node;
  }

  drag(bar, (e, from) => {
    const { scene, answer } = store.get();
    if (!scene || !answer) return;
    const { a_ms, b_ms } = now();
    const left = Math.min(a_ms, b_ms);
    const d = Math.abs(b_ms - a_ms);
    let t = timeAt(scene, from.mm + (e.clientX - from.x) / PX_PER_MM);
    if (!e.altKey) t = snapTo(t, e.clientY);
    t = clamp(t, 0, answer.span_ms - d);
    change(a_ms <= b_ms ? { a_ms: left + t - left, b_ms: t + d } : { a_ms: t + d, b_ms: t }, "caliper bar");
  }, () => place(Math.min(now().a_ms, now().b_ms)));
  bar.addEventListener("keydown", (e) => keys(e, (_, way) => {
    const { scene, answer } = store.get();
    const { a_ms, b_ms } = now();
    if (!scene || !answer) return;
    const left = Math.min(a_ms, b_ms);
    const step = e.shiftKey ? way : e.altKey ? 10 * way : (nextInstant(scene.times, left, way) ?? left) - left;
    const by = clamp(step, -left, answer.span_ms - Math.max(a_ms, b_ms));
    change({ a_ms: a_ms + by, b_ms: b_ms + by }, "caliper bar");
  }, "a_ms"));

  /** @param {number} ms */
  function place(ms) {
    const { scene } = store.get();
    return scene ? placeOf(scene, ms) : 0;
  }

  /** The event at an instant, where one is near; of the half that the pointer is in. @param {number} t @param {number} y */
  function snapTo(t, y) {
    const { scene } = store.get();
    if (!scene) return t;
    const mm = (y - over.getBoundingClientRect().top) / PX_PER_MM;
    const upper = scene.lanes.some((l) => l.name.startsWith("before:") && mm <= l.y1);
    return snapped(scene.times, t, (SNAP_PX / PX_PER_MM / scene.axis.mm_per_s) * 1000, upper);
  }

  /** @param {"a_ms" | "b_ms"} which @param {number} t @param {1 | -1} way */
  function moveTo(which, t, way) {
    const { answer, view } = store.get();
    if (!answer) return;
    const ms = clamp(t, 0, answer.span_ms);
    change({ [which]: ms }, `caliper ${which}`);
    const seen = reveal(view, ms, answer.span_ms);
    if (seen !== view && (way < 0 ? ms < view.t0_ms : ms > view.t0_ms + shown(view))) store.set({ view: seen });
  }

  /**
   * @param {KeyboardEvent} e
   * @param {(to: number | undefined, way: 1 | -1) => void} move
   * @param {"a_ms" | "b_ms"} which
   */
  function keys(e, move, which) {
    if (e.ctrlKey || e.metaKey) return;
    const { scene, view } = store.get();
    const way = e.key === "ArrowLeft" ? -1 : e.key === "ArrowRight" ? 1 : 0;
    if (way !== 0 && scene) {
      const t = now()[which];
      const to = e.shiftKey ? t + way : e.altKey ? t + 10 * way : nextInstant(scene.times, t, way) ?? t + (way * shown(view)) / 10;
      move(to, way);
    } else if (e.key === "Enter") change({ march: !now().march });
    else if (e.key === "Escape") toggle();
    else return;
    e.preventDefault();
    e.stopPropagation();
  }

  /**
   * @param {HTMLElement} node
   * @param {(e: PointerEvent, from: {x: number, y: number, mm: number}) => void} move
   * @param {() => number} start mm
   */
  function drag(node, move, start) {
    /** @type {{x: number, y: number, mm: number} | null} */
    let from = null;
    node.addEventListener("pointerdown", (e) => {
      if (e.button !== 0) return;
      e.stopPropagation();
      node.setPointerCapture(e.pointerId);
      from = { x: e.clientX, y: e.clientY, mm: start() };
      store.settle();
    });
    node.addEventListener("pointermove", (e) => {
      if (from) move(e, from);
    });
    for (const end of ["pointerup", "pointercancel"]) {
      node.addEventListener(end, () => {
        from = null;
        store.settle();
      });
    }
  }

  /** The read-out, for people who hear it. */
  function spoken() {
    const c = now();
    const { view } = store.get();
    return [...readings(c.b_ms - c.a_ms, view.mm_per_s), ...height(c)].join(", ");
  }

  /** @param {Calipers} c @returns {string[]} */
  function height(c) {
    const { scene, view } = store.get();
    if (!c.level || !scene) return [];
    const mm = Math.abs(c.level.y1_mm - c.level.y0_mm);
    const middle = (c.level.y0_mm + c.level.y1_mm) / 2;
    const lane = scene.lanes.find((l) => middle >= l.y0 && middle <= l.y1);
    const out = [`${num(mm, 1)} mm high`];
    if (lane && /^(before:)?lead:/.test(lane.name)) out.unshift(`${num(mm / view.mm_per_mv, 2)} mV`);
    return out;
  }

  function draw() {
    const { calipers: c, scene, view, answer } = store.get();
    over.hidden = !c.on || !scene;
    tool.setAttribute("aria-pressed", String(c.on));
    if (!c.on || !scene || !answer) return;
    const px = (/** @type {number} */ t) => placeOf(scene, t) * PX_PER_MM;
    const pane = over.closest(".timeline");
    over.style.setProperty("--top", `${(pane?.scrollTop ?? 0) + 26}px`);
    const first = px(Math.min(c.a_ms, c.b_ms));
    const last = px(Math.max(c.a_ms, c.b_ms));
    legs.forEach((node, i) => {
      const t = i === 0 ? c.a_ms : c.b_ms;
      node.style.transform = `translateX(${px(t)}px)`;
      node.hidden = px(t) < scene.axis.x0 * PX_PER_MM - 1 || px(t) > scene.width * PX_PER_MM + 1;
      slider(node, t, answer.span_ms, `${seconds(t)}; ${spoken()}`);
    });
    bar.style.transform = `translateX(${first}px)`;
    bar.style.width = `${Math.max(1, last - first)}px`;
    slider(bar, Math.min(c.a_ms, c.b_ms), answer.span_ms, `from ${seconds(Math.min(c.a_ms, c.b_ms))}; ${spoken()}`);
    levels.forEach((node, i) => {
      node.hidden = c.level === null;
      if (!c.level) return;
      const mm = i === 0 ? c.level.y0_mm : c.level.y1_mm;
      node.style.transform = `translateY(${mm * PX_PER_MM}px)`;
      slider(node, mm, scene.height, [`${num(mm, 1)} mm from the top`, ...height(c)].join("; "));
    });
    say(text, [...readings(c.b_ms - c.a_ms, view.mm_per_s), ...height(c)].join(" · "));
    for (const [b, on] of /** @type {[HTMLElement, boolean][]} */ ([[march, c.march], [volt, c.level !== null]])) b.setAttribute("aria-pressed", String(on));
    const room = (pane?.clientWidth ?? 0) - read.offsetWidth - 4;
    read.style.transform = `translateX(${clamp((first + last) / 2 - read.offsetWidth / 2, 4, room)}px)`;
    drawMarch(c, px);
    drawPins(c, px);
  }

  /** @param {HTMLElement} node @param {number} v @param {number} max @param {string} words */
  function slider(node, v, max, words) {
    node.setAttribute("aria-valuemin", "0");
    node.setAttribute("aria-valuemax", String(Math.round(max)));
    node.setAttribute("aria-valuenow", String(Math.round(v)));
    node.setAttribute("aria-valuetext", words);
  }

  /** @param {Calipers} c @param {(t: number) => number} px */
  function drawMarch(c, px) {
    const { view } = store.get();
    const pxPerMs = (view.mm_per_s * PX_PER_MM) / 1000;
    const legs = c.march ? marched(c, view.t0_ms, view.t0_ms + shown(view), CLOSEST_PX / pxPerMs) : [];
    const numbered = Math.abs(c.b_ms - c.a_ms) * pxPerMs >= COUNT_PX;
    fill(faint, legs.map(({ t, n }) => {
      const node = el("i", null, numbered && String(n));
      node.style.transform = `translateX(${px(t)}px)`;
      return node;
    }));
    faint.dataset.count = String(legs.length);
  }

  /** @param {Calipers} c @param {(t: number) => number} px */
  function drawPins(c, px) {
    const { view } = store.get();
    fill(pinned, c.pins.map((p, i) => {
      const x = [px(p.a_ms), px(p.b_ms)].sort((a, b) => a - b);
      const words = readings(p.b_ms - p.a_ms, view.mm_per_s).slice(0, -1).join(" · ");
      const node = el("div", { class: "caliper-pin" }, el("button", {
        type: "button", "aria-label": `Take away the pinned pair of ${words}`, title: "Take this pair away",
        onclick: () => change({ pins: now().pins.filter((_, k) => k !== i) }),
      }, `${words} ×`));
      node.style.transform = `translateX(${x[0]}px)`;
      node.style.width = `${x[1] - x[0]}px`;
      node.style.setProperty("--row", String(i % 4));
      node.hidden = p.b_ms < view.t0_ms && p.a_ms < view.t0_ms;
      return node;
    }));
  }

  return {
    tool, over, toggle,
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (changed.has("tab")) tool.hidden = state.tab !== "timeline";
      if (!["calipers", "scene", "view", "dark"].some((k) => changed.has(k))) return;
      if (state.calipers !== NO_CALIPERS) draw();
      if (changed.has("calipers")) announce();
      over.closest(".timeline")?.addEventListener("scroll", draw, { passive: true }); // adding the same again does nothing
    },
    destroy() {
      over.remove();
      tool.remove();
    },
  };
}
