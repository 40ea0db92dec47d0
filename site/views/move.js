// A move of a handle: the value follows, the timeline is computed anew, and where the
// outcome flips the place is looked for. One move is one step to undo.

import { put } from "../model/path.js";
import { flipLog } from "../model/flips.js";
import { sameHandle, timeOf } from "../model/handle.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../model/handle.js").Handle} Handle
 */

/** @typedef {ReturnType<typeof moves>} Moves */

/**
 * @param {Store} store
 * @param {(op: import("../engine/client.js").Op, args: any) => Promise<any>} ask
 * @param {() => void} changed the flips known have changed
 */
export function moves(store, ask, changed) {
  let under = false; // a pointer holds it
  let handle = /** @type {Handle | null} */ (null); // as it stood at the beginning
  let plan = /** @type {any} */ (null);
  let value = 0;
  let log = flipLog();
  let asking = false;
  let last = /** @type {any} */ (null); // the plan that this move made last

  /** Notes what the timeline on the sheet came to. */
  function note() {
    const { answer, computed } = store.get();
    if (!handle || !answer) return;
    const v = valueOf(computed);
    if (v !== null) log.note(v, answer.findings);
    refine();
  }

  /** The moved value in a plan; null where the plan is none of this move. @param {any} of */
  function valueOf(of) {
    if (!handle) return null;
    if (of === plan) return handle.value;
    return made.get(of) ?? null;
  }
  /** @type {WeakMap<object, number>} */
  let made = new WeakMap();

  /** Looks for the exact place of a flip, one at a time. */
  async function refine() {
    if (asking || !handle) return;
    const own = log;
    const step = handle.unit === "/min" ? 1 : 1;
    const rough = own.flips().find((f) => f.high - f.low > step && !own.known().some((k) => k.exact && k.low >= f.low && k.high <= f.high));
    if (!rough) return changed();
    asking = true;
    const reply = await ask("flip", { plan, path: handle.path, low: rough.low, high: rough.high, step });
    asking = false;
    if (own !== log) return;
    own.found(rough.low, rough.high, reply?.json?.low ?? rough.low, reply?.json?.high ?? rough.high);
    changed();
    refine();
  }

  /** Ends the move in hand, keeping its flips on the sheet. */
  function settle() {
    under = false;
    store.settle();
  }

  return {
    /** @param {Handle} h @param {boolean} pointer */
    begin(h, pointer) {
      store.settle();
      handle = h;
      value = h.value;
      plan = store.get().plan;
      last = plan;
      log = flipLog();
      made = new WeakMap();
      under = pointer;
      note();
      if (store.get().selected !== h.event) store.set({ selected: h.event });
    },

    /** @param {number} v */
    to(v) {
      if (!handle || v === value) return;
      value = v;
      last = v === handle.value ? plan : put(plan, handle.path, v);
      made.set(last, v);
      store.edit(last, `move ${handle.path}`);
    },

    settle,

    /** Puts back what was moved. */
    cancel() {
      if (!handle) return;
      store.edit(plan, `move ${handle.path}`);
      settle();
      handle = null;
      log = flipLog();
      changed();
    },

    held: () => (under ? handle : null),
    moved: () => handle,
    value: () => value,
    flips: () => (handle ? log.known() : []),

    /** Where the moved handle stands now, as far as the sheet shows it. */
    now() {
      const { scene } = store.get();
      return handle && scene ? sameHandle(scene.handles, handle, timeOf(handle, value)) : null;
    },

    /** @param {State} state @param {Set<string>} keys */
    update(state, keys) {
      if (!handle) return;
      if (keys.has("plan") && state.plan !== last) { // changed by another hand
        handle = null;
        log = flipLog();
        changed();
        return;
      }
      if (!keys.has("answer") && !keys.has("scene")) return;
      if (keys.has("answer")) note();
      if (!under && state.selected === 0) return; // let go of meanwhile
      const at = this.now();
      if (at && state.computed === last && at.event !== state.selected && Math.abs(at.t_ms - timeOf(handle, value)) < 400) store.set({ selected: at.event });
    },
  };
}
