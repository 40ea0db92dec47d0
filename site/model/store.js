// The page's state: one object, replaced as a whole, and who wants to know.
// Holds no DOM, so it runs under a test runner as it stands.

/**
 * @typedef {import("./path.js").Plan} Plan
 * @typedef {import("./view.js").View} View
 * @typedef {import("../engine/wire.js").Answer} Answer
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 * @typedef {import("../engine/wire.js").Diagnosis} Diagnosis
 * @typedef {import("../engine/wire.js").Account} Account
 * @typedef {import("../engine/scene.js").Scene} Scene
 */

/**
 * @typedef {object} State
 * @property {Plan} plan what the user has typed, right or wrong
 * @property {string} preset name of the preset the plan came from, or ""
 * @property {View} view
 * @property {Answer | null} answer of the last plan that could be computed
 * @property {Scene | null} scene of that answer, as last laid out
 * @property {Diagnosis[]} diagnoses of the plan as it stands; empty when it is good
 * @property {string} fault what went wrong inside the engine, or ""
 * @property {number} selected id of an event, or 0
 * @property {Account | null} account of the selected event
 * @property {number[]} lit events pointed at by a clause or a finding
 * @property {string} drawer "settings", "account" or "": what lies open over the sheet on a narrow screen
 * @property {"timeline" | "listing"} tab
 * @property {boolean} dark
 */

/** @typedef {ReturnType<typeof createStore>} Store */

const HISTORY = 200; // steps kept

/**
 * @param {State} first
 */
export function createStore(first) {
  let state = first;
  /** @type {Plan[]} */
  let past = [];
  /** @type {Plan[]} */
  let future = [];
  let stroke = "";
  /** @type {Set<(state: State, changed: Set<string>) => void>} */
  const listeners = new Set();

  /** @param {Partial<State>} patch */
  function set(patch) {
    const changed = new Set();
    for (const [k, v] of Object.entries(patch)) {
      if (/** @type {any} */ (state)[k] !== v) changed.add(k);
    }
    if (changed.size === 0) return;
    state = { ...state, ...patch };
    for (const tell of listeners) tell(state, changed);
  }

  return {
    get: () => state,
    set,

    /**
     * Changes the plan so that it can be undone. Edits under the same name that
     * follow each other (typing into one field, one drag) are one step.
     * @param {Plan} plan
     * @param {string} name what is being edited
     * @param {Partial<State>} [also]
     */
    edit(plan, name, also) {
      if (name !== stroke || name === "") {
        past = [...past.slice(-HISTORY + 1), state.plan];
        future = [];
      }
      stroke = name;
      set({ ...also, plan });
    },

    /** Ends the step begun by the last edit. */
    settle() {
      stroke = "";
    },

    undo() {
      const plan = past.pop();
      if (plan === undefined) return false;
      future.push(state.plan);
      stroke = "";
      set({ plan });
      return true;
    },

    redo() {
      const plan = future.pop();
      if (plan === undefined) return false;
      past.push(state.plan);
      stroke = "";
      set({ plan });
      return true;
    },

    canUndo: () => past.length > 0,
    canRedo: () => future.length > 0,

    /** @param {(state: State, changed: Set<string>) => void} fn */
    subscribe(fn) {
      listeners.add(fn);
      return () => listeners.delete(fn);
    },
  };
}
