// Runs a plan's sweep on a pool of engines, coarse to fine, in batches that grow until
// each takes some sixty milliseconds; then looks for the exact places where the shown
// behaviour changes. Can be stopped and gone on with. Holds no DOM.

import { coarseToFine, createGrid } from "../model/grid.js";
import { mapKey } from "../model/sweep.js";

/**
 * @typedef {import("./pool.js").Pool} Pool
 * @typedef {import("../model/grid.js").Grid} Grid
 * @typedef {{name: string, label: string, value: number, unit: string, formula: string, numbers: string, source: string, off: number}} Form
 * @typedef {{low: number, high: number, before: string, after: string, closed_form: Form | null}} Boundary
 */

/**
 * @typedef {object} Run
 * @property {any} plan whose sweep it is
 * @property {string} key of the plan; see mapKey
 * @property {Grid | null} grid null until the engine has said how large it is
 * @property {"running" | "done" | "cancelled" | "failed" | "refused"} state
 * @property {string} why it failed, or what is wrong with the sweep
 * @property {number} ms it took so far, while it ran
 * @property {number} first_ms until the first results were there
 * @property {number} workers
 * @property {Map<string, {at: number, along: number, found: Boundary[]}[]>} bounds exact boundaries, by outcome
 */

/** @typedef {ReturnType<typeof sweeper>} Sweeper */

const FIRST_BATCH = 4;
const BATCH_MS = 60;
const LARGEST_BATCH = 256;
const MOST_HALVINGS = 4000; // changes between neighbours that are looked into

/**
 * @param {Pool} pool
 * @param {() => void} changed
 */
export function sweeper(pool, changed) {
  /** @type {Run | null} */
  let run = null;
  /** @type {number[]} */
  let todo = [];
  let began = 0;

  /** @param {Run} r @param {Partial<Run>} patch */
  function tell(r, patch) {
    if (r !== run) return;
    Object.assign(r, patch);
    changed();
  }

  /** @param {Run} r @param {unknown} err */
  function fail(r, err) {
    if (r !== run || r.state !== "running") return;
    tell(r, { state: "failed", why: err instanceof Error ? err.message : String(err), ms: r.ms + performance.now() - began });
  }

  /** One engine's share: the next points until none are left. @param {Run} r */
  async function work(r) {
    let size = FIRST_BATCH;
    const { plan, grid } = r;
    while (grid && r === run && r.state === "running" && todo.length > 0) {
      const points = todo.splice(0, Math.min(size, Math.max(1, Math.ceil(todo.length / pool.size()))));
      const from = performance.now();
      let json;
      try {
        json = await pool.ask("sweep", { plan, points });
      } catch (err) {
        todo.unshift(...points); // to go on with
        return fail(r, err);
      }
      if (r !== run) return;
      grid.put(json.slice); // also after Cancel: it has been computed
      todo = r.state === "running" ? todo : todo.filter((p) => !grid.has(p));
      const each = (performance.now() - from) / points.length;
      size = Math.max(1, Math.min(LARGEST_BATCH, 3 * size, Math.round(BATCH_MS / each)));
      tell(r, r.first_ms === 0 ? { first_ms: performance.now() - began } : {});
    }
  }

  /** @param {Run} r */
  async function go(r) {
    began = performance.now();
    performance.mark("map-start");
    tell(r, { state: "running", why: "", workers: pool.size() });
    if (!r.grid) {
      let json;
      try {
        json = await pool.ask("sweep", { plan: r.plan });
      } catch (err) {
        return fail(r, err);
      }
      if (r !== run || r.state !== "running") return;
      if (!json.ok) return tell(r, { state: "refused", why: json.diagnoses.map((/** @type {any} */ d) => d.text).join("\n") });
      r.grid = createGrid(json.head);
      todo = coarseToFine(r.grid.nx, r.grid.ny);
    }
    await Promise.all(Array.from({ length: pool.size() }, () => work(r)));
    if (r !== run || r.state !== "running") return;
    performance.measure("map", "map-start");
    tell(r, { state: "done", ms: r.ms + performance.now() - began });
  }

  /**
   * The steps of an axis over which a word changes, row by row or column by column.
   * @param {Run} r @param {string} outcome @param {number} along
   */
  function changes(r, outcome, along) {
    const g = /** @type {Grid} */ (r.grid);
    const [n, rows] = along === 0 ? [g.nx, g.ny] : [g.ny, g.nx];
    const out = [];
    for (let at = 0; at < rows; at++) {
      const word = (/** @type {number} */ i) => {
        const p = along === 0 ? at * g.nx + i : i * g.nx + at;
        return g.refused(p) !== undefined ? "refused" : (g.at(p, outcome)?.word ?? "");
      };
      const after = [];
      for (let i = 0; i + 1 < n; i++) if (word(i) !== word(i + 1)) after.push(i);
      if (after.length > 0) out.push({ at, along, after });
    }
    return out;
  }

  /** Whether the engine can look between the values of an axis. @param {any} axis */
  const numeric = (axis) => axis && axis.from !== undefined;

  return {
    run: () => run,

    /** @param {any} plan */
    start(plan) {
      run = { plan, key: mapKey(plan), grid: null, state: "running", why: "", ms: 0, first_ms: 0, workers: pool.size(), bounds: new Map() };
      todo = [];
      go(run);
    },

    cancel() {
      if (run?.state === "running") tell(run, { state: "cancelled", ms: run.ms + performance.now() - began });
    },

    resume() {
      if (run && (run.state === "cancelled" || run.state === "failed")) go(run);
    },

    /**
     * Finds the exact boundaries of a word between neighbours that differ, for all rows
     * and columns; each row is told as it comes.
     * @param {string} outcome
     */
    async refine(outcome) {
      const r = run;
      if (!r || r.state !== "done" || !r.grid || r.bounds.has(outcome) || r.grid.head.seeds.length > 1) return;
      /** @type {{at: number, along: number, found: Boundary[]}[]} */
      const found = [];
      r.bounds.set(outcome, found);
      const { x, y } = r.plan.sweep;
      const rows = [...(numeric(x) ? changes(r, outcome, 0) : []), ...(numeric(y) ? changes(r, outcome, 1) : [])];
      if (rows.reduce((n, c) => n + c.after.length, 0) > MOST_HALVINGS) return;
      await Promise.all(Array.from({ length: pool.size() }, async () => {
        for (let c = rows.shift(); c && r === run; c = rows.shift()) {
          const json = await pool.ask("boundary", { plan: r.plan, outcome, along: c.along, at: c.at, after: c.after }).catch(() => null);
          if (json?.ok && r === run) {
            found.push({ at: c.at, along: c.along, found: json.boundaries });
            changed();
          }
        }
      }));
    },

    /**
     * Every boundary along one row or column, with closed forms.
     * @param {string} outcome @param {number} along @param {number} at @param {number} [from] of a number: below it or from it on
     * @returns {Promise<{boundaries: Boundary[], alone: Form[]} | null>}
     */
    async boundaries(outcome, along, at, from) {
      const r = run;
      if (!r?.grid || !numeric(along === 0 ? r.plan.sweep.x : r.plan.sweep.y)) return null;
      const json = await pool.ask("boundary", { plan: r.plan, outcome, along, at, from }).catch(() => null);
      return json?.ok && r === run ? json : null;
    },

    /** The plan of a point by the engine's word. @param {number} point */
    async planOf(point) {
      const json = await pool.ask("sweep_plan", { plan: run?.plan, point, seed: run?.grid?.head.seeds[0] ?? 1 }).catch(() => null);
      return json?.ok ? json.plan : null;
    },
  };
}
