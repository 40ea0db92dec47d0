// The pointers on the timeline. One that moves pans, or moves what has a handle; one
// that does not move picks; two pinch.

import { PX_PER_MM } from "../base/scale.js";
import { handleAt, timeAt } from "../engine/scene.js";
import { pan, zoomTo } from "../model/view.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/handle.js").Handle} Handle
 */

/**
 * @typedef {object} On
 * @property {(e: PointerEvent) => void} moveHair
 * @property {() => void} hideHair
 * @property {(e: PointerEvent, held: Handle | null) => void} pick
 * @property {(e: PointerEvent) => {x: number, y: number}} place in millimetres
 * @property {(h: Handle, at: {x: number, y: number}) => void} take a handle has begun to move, taken hold of at a place
 * @property {(e: PointerEvent) => void} drag it to the pointer
 * @property {(back: boolean) => void} drop it there, or put it back
 */

const STILL_PX = 4; // a pointer that moved less has not moved
const FINGER_PX = 16; // how near a finger must be to a handle

/**
 * @param {HTMLCanvasElement} canvas
 * @param {Store} store
 * @param {On} on
 * @param {number} reach px
 */
export function grip(canvas, store, on, reach) {
  /** @type {Map<number, {x: number, y: number}>} */
  const down = new Map();
  let moved = false;
  let held = /** @type {Handle | null} */ (null);
  let from = { x: 0, t0: 0 };
  let pressed = { x: 0, y: 0 }; // mm
  let pinch = { gap: 0, speed: 0, t: 0 };

  const gap = () => {
    const [a, b] = [...down.values()];
    return Math.max(20, Math.abs(a.x - b.x));
  };

  /** @param {PointerEvent} e */
  function press(e) {
    if (e.button !== 0) return;
    const { view, scene } = store.get();
    if (!scene) return;
    canvas.setPointerCapture(e.pointerId);
    down.set(e.pointerId, { x: e.clientX, y: e.clientY });
    const { x, y } = on.place(e);
    if (down.size === 1) {
      pressed = { x, y };
      moved = false;
      from = { x: e.clientX, t0: view.t0_ms };
      held = handleAt(scene, x, y, (e.pointerType === "touch" ? FINGER_PX : reach) / PX_PER_MM);
    } else if (down.size === 2) {
      if (held && moved) on.drop(true);
      moved = true;
      held = null;
      pinch = { gap: gap(), speed: view.mm_per_s, t: timeAt(scene, x) };
    }
  }

  /** @param {PointerEvent} e */
  function move(e) {
    const at = down.get(e.pointerId);
    const { view, answer } = store.get();
    if (!at || !answer) {
      if (e.pointerType !== "touch") on.moveHair(e);
      return;
    }
    at.x = e.clientX;
    at.y = e.clientY;
    if (down.size === 2) {
      store.set({ view: zoomTo(view, (pinch.speed * gap()) / pinch.gap, pinch.t, answer.span_ms) });
      return;
    }
    const dx = e.clientX - from.x;
    if (!moved && Math.abs(dx) < STILL_PX) return;
    if (held) {
      if (!moved) on.take(held, pressed);
      moved = true;
      on.drag(e);
      return;
    }
    if (!moved) store.settle();
    moved = true;
    canvas.classList.add("grabbed");
    on.hideHair();
    const t0_ms = from.t0 - (dx / PX_PER_MM / view.mm_per_s) * 1000;
    store.set({ view: pan({ ...view, t0_ms }, 0, answer.span_ms) });
  }

  /** @param {PointerEvent} e */
  function lift(e) {
    const was = down.delete(e.pointerId);
    canvas.classList.remove("grabbed");
    if (was && !moved && e.type === "pointerup") on.pick(e, held);
    if (held && moved) on.drop(e.type === "pointercancel");
    held = null;
    if (down.size === 1) from = { x: [...down.values()][0].x, t0: store.get().view.t0_ms };
  }

  /** Escape puts back what is being moved. @param {KeyboardEvent} e */
  function escape(e) {
    if (e.key !== "Escape" || !held || !moved) return;
    e.stopPropagation();
    on.drop(true);
    held = null;
  }

  canvas.addEventListener("pointerdown", press);
  canvas.addEventListener("pointermove", move);
  canvas.addEventListener("pointerup", lift);
  canvas.addEventListener("pointercancel", lift);
  canvas.addEventListener("pointerleave", on.hideHair);
  document.addEventListener("keydown", escape, true);
  return {
    destroy() {
      document.removeEventListener("keydown", escape, true);
      down.clear();
    },
  };
}
