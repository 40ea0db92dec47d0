// Goals of a plan as they are edited, and what a search's rows say of one another.
// The engine judges them. Holds no DOM.

/** @typedef {import("./path.js").Plan} Plan */
/** @typedef {{name?: string, outcome: string, in?: string[], at_least?: any, at_most?: any, equal?: string | string[], none_of?: string[]}} Goal */
/** @typedef {{outcome?: string, setting?: string, in?: string[], best: "lowest" | "highest"}} Wish */
/** @typedef {{name: string, set?: Record<string, any>, interventions?: any[], vary?: any}} Situation */
/** @typedef {{settings: any[], situations: Situation[], must?: Goal[], prefer?: Wish[], seeds?: any}} Goals */

/** What goals begin with where a plan has none: to edit from. @param {Plan} plan @returns {Goals} */
export function firstGoals(plan) {
  const device = plan.pacemaker != null;
  return {
    settings: [device ? { field: "pacemaker.pvarp_ms", from: 200, to: 400, step: 20 } : { field: "heart.sinus.rate_bpm", from: 50, to: 100, step: 10 }],
    situations: [{ name: "as it stands" }],
    must: [{ outcome: "longest_pause_ms", at_most: 1500 }],
    prefer: device ? [{ outcome: "ventricular_paced_percent", best: "lowest" }] : [{ outcome: "v_rate_bpm", best: "lowest" }],
  };
}

/**
 * Without one of the items of a list; a list that becomes empty goes.
 * @param {Goals} goals @param {"settings" | "situations" | "must" | "prefer"} list @param {number} i
 * @returns {Goals}
 */
export function without(goals, list, i) {
  const left = /** @type {any[]} */ (goals[list] ?? []).filter((_, k) => k !== i);
  const { [list]: _, ...rest } = goals;
  return /** @type {Goals} */ (left.length === 0 && (list === "must" || list === "prefer") ? rest : { ...rest, [list]: left });
}

/**
 * With a situation called otherwise, wherever it is named.
 * @param {Goals} goals @param {number} i @param {string} name
 * @returns {Goals}
 */
export function renamed(goals, i, name) {
  const old = goals.situations[i].name;
  const among = (/** @type {{in?: string[]}} */ g) => (g.in ? { ...g, in: g.in.map((s) => (s === old ? name : s)) } : g);
  return {
    ...goals,
    situations: goals.situations.map((s, k) => (k === i ? { ...s, name } : s)),
    ...(goals.must && { must: goals.must.map((g) => /** @type {Goal} */ (among(g))) }),
    ...(goals.prefer && { prefer: goals.prefer.map((g) => /** @type {Wish} */ (among(g))) }),
  };
}

/**
 * How far each setting of a row may go with the others left as they are, every step
 * between holding all goals. The settings vary as the engine numbers them, the first
 * fastest.
 * @param {{values: any[]}[]} settings
 * @param {Set<number>} good combinations that hold every goal
 * @param {number} combination
 * @returns {{low: any, high: any, steps: number}[]}
 */
export function roomAround(settings, good, combination) {
  let stride = 1;
  return settings.map(({ values }) => {
    const n = values.length;
    const at = Math.floor(combination / stride) % n;
    const base = combination - at * stride;
    let low = at;
    while (low > 0 && good.has(base + (low - 1) * stride)) low--;
    let high = at;
    while (high + 1 < n && good.has(base + (high + 1) * stride)) high++;
    stride *= n;
    return { low: values[low], high: values[high], steps: high - low + 1 };
  });
}

/**
 * The margin of a row that is smallest against what its goal asks; −1 where every goal
 * is a word.
 * @param {{margin: number | null, value: number | null}[]} margins
 */
export function tightest(margins) {
  let best = -1;
  let least = Infinity;
  margins.forEach((m, i) => {
    if (m.margin === null || m.value === null) return;
    const share = m.margin / Math.max(1e-9, Math.abs(m.value) + Math.abs(m.margin));
    if (share < least) [best, least] = [i, share];
  });
  return best;
}
