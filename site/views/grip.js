// The hand on the timeline. One pointer that moves pans, or moves what has a
// handle; one that does not move picks; two pinch.

import { clamp, PX_PER_MM } from "../base/scale.js";
import { handleAt, timeAt } from "../engine/scene.js";
import { put } from "../model/path.js";
import { pan, zoomTo } from "../model/view.js";

/** @typedef {import("../model/store.js").Store} Store */

/**
 * @typedef {object} On
 * @property {(e: PointerEvent) => void} moveHair
 * @property {() => void} hideHair
 * @property {(e: PointerEvent) => void} pick
 * @property {(e: PointerEvent) => {x: number, y: number}} place in millimetres
 * @property {(ms: number) => void} showMoved
 */

const STILL_PX = 4; // a pointer that moved less has not moved

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
  let held = -1; // place of an intervention in its list
  let before = /** @type {any} */ (null); // the plan, to put it back
  let from = { x: 0, t0: 0 };
  let pinch = { gap: 0, speed: 0, t: 0 };

  const gap = () => {
    const [a, b] = [...down.values()];
    return Math.max(20, Math.abs(a.x - b.x));
  };

  /** @param {PointerEvent} e */
  function press(e) {
    if (e.button !== 0) return;
    const { view, scene, plan } = store.get();
    if (!scene) return;
    canvas.setPointerCapture(e.pointerId);
    down.set(e.pointerId, { x: e.clientX, y: e.clientY });
    const { x, y } = on.place(e);
    if (down.size === 1) {
      moved = false;
      from = { x: e.clientX, t0: view.t0_ms };
      held = handleAt(scene, x, y, reach / PX_PER_MM);
      before = plan;
    } else if (down.size === 2) {
      moved = true;
      held = -1;
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
    if (!moved) store.settle();
    moved = true;
    if (held >= 0) {
      shift(e);
      return;
    }
    canvas.classList.add("grabbed");
    on.hideHair();
    const t0_ms = from.t0 - (dx / PX_PER_MM / view.mm_per_s) * 1000;
    store.set({ view: pan({ ...view, t0_ms }, 0, answer.span_ms) });
  }

  /** Moves the held intervention to the pointer. @param {PointerEvent} e */
  function shift(e) {
    const { scene, answer, plan } = store.get();
    if (!scene || !answer) return;
    const step = scene.axis.mm_per_s < 40 ? 5 : scene.axis.mm_per_s < 150 ? 2 : 1;
    const ms = clamp(Math.round(timeAt(scene, on.place(e).x) / step) * step, 0, answer.span_ms);
    on.showMoved(ms);
    store.edit(put(plan, `interventions[${held}].at_ms`, ms), `move ${held}`);
  }

  /** @param {PointerEvent} e */
  function lift(e) {
    const was = down.delete(e.pointerId);
    canvas.classList.remove("grabbed");
    if (was && !moved && e.type === "pointerup") on.pick(e);
    if (held >= 0 && moved) {
      store.settle();
      on.hideHair();
    }
    held = -1;
    if (down.size === 1) from = { x: [...down.values()][0].x, t0: store.get().view.t0_ms };
  }

  /** Escape puts back what is being moved. @param {KeyboardEvent} e */
  function escape(e) {
    if (e.key !== "Escape" || held < 0 || !moved) return;
    e.stopPropagation();
    store.edit(before, `move ${held}`);
    store.settle();
    held = -1;
    on.hideHair();
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
