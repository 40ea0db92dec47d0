// Runs the search of a plan's goals on an engine of its own, in slices of some hundred
// milliseconds; the engine keeps its state between them, so it can be stopped and gone
// on with. Holds no DOM.

/**
 * @typedef {import("./pool.js").Pool} Pool
 * @typedef {{goal: number, holds: boolean, margin: number | null, value: number | null, word?: string, situation: string, at?: string, closed_form: {label?: string, value?: number, unit?: string, formula?: string} | null, otherwise?: boolean}} Margin
 * @typedef {{combination: number, values: any[], wishes: ({mean: number, unit: string} | null)[], margins: Margin[], runs: number}} Found
 * @typedef {{goals: number[], reach: (Margin & {values: any[], text: string})[], by_closed_forms: boolean, text: string}} Conflict
 */

/**
 * @typedef {object} Answer
 * @property {string} text
 * @property {{field: string, label: string, unit: string, values: any[], now: any}[]} settings
 * @property {{name: string, runs: number, vary?: string}[]} situations
 * @property {{text: string, unit: string}[]} goals
 * @property {string[]} wishes
 * @property {{combinations: number, tried: number, refused: number, excluded: string[], runs: number}} work
 * @property {number} found_count
 * @property {Found[]} found best first
 * @property {Conflict[]} conflicts
 */

/**
 * @typedef {object} Hunt
 * @property {any} plan whose goals they are
 * @property {"running" | "done" | "cancelled" | "failed" | "refused"} state
 * @property {string} why
 * @property {number} done combinations in this phase
 * @property {number} of
 * @property {number} phase 1 settings, 2 conflicts
 * @property {number} ms
 * @property {Answer | null} answer
 */

/** @typedef {ReturnType<typeof searcher>} Searcher */

const SLICE_MS = 120;
const FIRST_BUDGET = 40; // runs
const TELL = 20; // of the settings found, while it runs
export const MOST = 3000; // of those found, at the end

/**
 * @param {Pool} pool of one engine
 * @param {() => void} changed
 */
export function searcher(pool, changed) {
  /** @type {Hunt | null} */
  let hunt = null;

  /** @param {Hunt} h @param {boolean} again */
  async function go(h, again) {
    let budget = FIRST_BUDGET;
    Object.assign(h, { state: "running", why: "" });
    changed();
    const began = performance.now() - h.ms;
    for (let first = again; h === hunt && h.state === "running"; first = false) {
      const from = performance.now();
      let json;
      try {
        json = await pool.ask("search", { plan: h.plan, budget, most: TELL, again: first });
        if (json.ok && json.finished) json = await pool.ask("search", { plan: h.plan, budget: 1, most: MOST });
      } catch (err) {
        if (h === hunt) Object.assign(h, { state: "failed", why: err instanceof Error ? err.message : String(err), answer: null });
        break;
      }
      if (h !== hunt) return;
      h.ms = performance.now() - began;
      if (!json.ok) Object.assign(h, { state: "refused", why: json.diagnoses.map((/** @type {any} */ d) => d.text).join("\n") });
      else {
        Object.assign(h, { done: json.done, of: json.of, phase: json.phase, answer: json.answer ?? h.answer });
        if (json.finished) h.state = "done";
      }
      budget = Math.max(10, Math.min(20000, Math.round((budget * SLICE_MS) / Math.max(5, performance.now() - from)), 4 * budget));
      changed();
    }
    changed();
  }

  return {
    hunt: () => hunt,
    /** @param {any} plan */
    start(plan) {
      hunt = { plan, state: "running", why: "", done: 0, of: 0, phase: 1, ms: 0, answer: null };
      go(hunt, true);
    },
    cancel() {
      if (hunt?.state === "running") hunt.state = "cancelled";
      changed();
    },
    /** Goes on where it stopped; after a failure from the beginning, for the engine's memory is gone. */
    resume() {
      if (hunt?.state === "cancelled") go(hunt, false);
      else if (hunt?.state === "failed") go(hunt, true);
    },
    /** @param {number} combination @param {string} situation */
    async planOf(combination, situation) {
      const json = await pool.ask("search_plan", { plan: hunt?.plan, combination, situation }).catch(() => null);
      return json?.ok ? json.plan : null;
    },
  };
}
