// The page's state: one object, replaced as a whole, and who wants to know.
// Holds no DOM, so it runs under a test runner as it stands.

/**
 * @typedef {import("./path.js").Plan} Plan
 * @typedef {import("./view.js").View} View
 * @typedef {import("../engine/wire.js").Answer} Answer
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 * @typedef {import("../engine/wire.js").Diagnosis} Diagnosis
 * @typedef {import("../engine/wire.js").Account} Account
 * @typedef {import("../engine/wire.js").Contrast} Contrast
 * @typedef {import("./calipers.js").Calipers} Calipers
 * @typedef {import("../engine/scene.js").Scene} Scene
 */

/**
 * @typedef {object} State
 * @property {Plan} plan what the user has typed, right or wrong
 * @property {string} preset name of the preset the plan came from, or ""
 * @property {{id: string, stamp: string, title: string} | null} kept the kept plan it came from
 * @property {View} view
 * @property {Answer | null} answer of the last plan that could be computed
 * @property {Plan | null} computed the plan of that answer
 * @property {Scene | null} scene of that answer, as last laid out
 * @property {Diagnosis[]} diagnoses of the plan as it stands; empty when it is good
 * @property {string} fault what went wrong inside the engine, or ""
 * @property {number} selected id of an event, or 0
 * @property {Account | null} account of the selected event
 * @property {import("../engine/wire.js").Extra | null} extra what came of the selected extra beat
 * @property {import("../engine/wire.js").Scan | null} scan of an extra beat, as far as it has come
 * @property {import("../engine/wire.js").Gap | null} gap in which no stimulus came, that was asked about
 * @property {number[]} lit events pointed at by a clause or a finding
 * @property {string} drawer "settings", "account" or "": what lies open over the sheet on a narrow screen
 * @property {"timeline" | "listing" | "map"} tab
 * @property {boolean} dark
 * @property {{until_ms: number} | null} present what comes after an instant is covered
 * @property {Before | null} before the plan to compare with
 * @property {Contrast | null} contrast how the answer differs from that of the plan before
 * @property {"contrast" | "measured"} panel what the Account holds where nothing is selected and there is a plan before
 * @property {Calipers} calipers
 */

/** @typedef {{plan: Plan, preset: string, title: string}} Before */

/** @typedef {ReturnType<typeof createStore>} Store */

const HISTORY = 200; // steps kept

/** Keys of the state that a step can take back. A view belongs here by its choices. */
const UNDOABLE = ["plan", "preset", "kept", "before", "calipers", "view"];

/** What of a view is not a choice: where one looks, and how much room there is. */
const PASSING = ["t0_ms", "width_mm", "height_mm", "mm_per_s"];

/** What a step changed, with the values to put back. @typedef {{keys: Record<string, any>, view: Record<string, any>}} Step */

/**
 * @param {State} first
 */
export function createStore(first) {
  let state = first;
  /** @type {Step[]} */
  let past = [];
  /** @type {Step[]} */
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

  /**
   * Takes the state to a step's values.
   * @param {Step} step
   * @returns {Step} the way back
   */
  function take(step) {
    const now = /** @type {any} */ (state);
    const back = { keys: pick(now, Object.keys(step.keys)), view: pick(now.view, Object.keys(step.view)) };
    const view = Object.keys(step.view).length > 0 ? { view: { ...state.view, ...step.view } } : {};
    stroke = "";
    set({ ...step.keys, ...view });
    return back;
  }

  /**
   * Changes the state so that it can be undone. Changes under the same name that
   * follow each other (typing into one field, one drag) are one step. What is not
   * undoable (the selection, panning) may change along with it and stays.
   * @param {Partial<State>} patch
   * @param {string} name what is being changed; "" always begins a step
   */
  function change(patch, name) {
    const step = stepOf(state, patch);
    const last = past[past.length - 1];
    if (name !== "" && name === stroke && last) {
      last.keys = { ...step.keys, ...last.keys };
      last.view = { ...step.view, ...last.view };
    } else if (!idle(step)) {
      past = [...past.slice(-HISTORY + 1), step];
      future = [];
      stroke = name;
    }
    set(patch);
    const made = past[past.length - 1];
    if (stroke !== "" && made && same(made)) { // put back by hand: nothing is left to undo
      past = past.slice(0, -1);
      stroke = "";
    }
  }

  /** Whether the state is as it was before a step. @param {Step} step */
  function same(step) {
    const now = /** @type {any} */ (state);
    return Object.entries(step.keys).every(([k, v]) => now[k] === v) && Object.entries(step.view).every(([k, v]) => now.view[k] === v);
  }

  return {
    get: () => state,
    set,
    change,

    /**
     * Changes the plan so that it can be undone; see change.
     * @param {Plan} plan
     * @param {string} name what is being edited
     * @param {Partial<State>} [also]
     */
    edit: (plan, name, also) => change({ ...also, plan }, name),

    /** Ends the step begun by the last change. */
    settle() {
      stroke = "";
    },

    undo() {
      const step = past.pop();
      if (step) future.push(take(step));
      return step !== undefined;
    },

    redo() {
      const step = future.pop();
      if (step) past.push(take(step));
      return step !== undefined;
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

/**
 * What a patch changes of what can be undone, with the values before it.
 * @param {any} state
 * @param {any} patch
 * @returns {Step}
 */
function stepOf(state, patch) {
  const keys = UNDOABLE.filter((k) => k !== "view" && k in patch && patch[k] !== state[k]);
  const view = patch.view ? Object.keys({ ...state.view, ...patch.view }).filter((k) => !PASSING.includes(k) && patch.view[k] !== state.view[k]) : [];
  return { keys: pick(state, keys), view: pick(state.view, view) };
}

/** @param {any} from @param {string[]} names @returns {Record<string, any>} */
function pick(from, names) {
  return Object.fromEntries(names.map((k) => [k, from?.[k]]));
}

/** @param {Step} step */
function idle(step) {
  return Object.keys(step.keys).length === 0 && Object.keys(step.view).length === 0;
}
