// Places in a plan, written as the engine writes them in its diagnoses:
// "heart.foci[0].rate_bpm". A plan is never changed in place; every function
// that changes one returns a new one that shares what stayed.

/** @typedef {Record<string, any>} Plan */

/**
 * @param {string} path
 * @returns {(string | number)[]}
 */
export function steps(path) {
  let out = known.get(path);
  if (!out) {
    out = [];
    for (const m of path.matchAll(/([^.[\]]+)|\[(\d+)\]/g)) out.push(m[2] === undefined ? m[1] : Number(m[2]));
    known.set(path, out);
  }
  return out;
}

/** Every row asks for its own path at every change. @type {Map<string, (string | number)[]>} */
const known = new Map();

/**
 * The value at a path; undefined where the plan does not say.
 * @param {any} plan
 * @param {string} path
 * @returns {any}
 */
export function get(plan, path) {
  let v = plan;
  for (const s of steps(path)) {
    if (v === null || typeof v !== "object") return undefined;
    v = v[s];
  }
  return v;
}

/**
 * The plan with a value at a path; objects on the way are made where missing or null.
 * @param {any} plan
 * @param {string} path
 * @param {any} value
 * @returns {any}
 */
export function put(plan, path, value) {
  return putSteps(plan, steps(path), value);
}

/**
 * @param {any} node
 * @param {(string | number)[]} at
 * @param {any} value
 * @returns {any}
 */
function putSteps(node, at, value) {
  if (at.length === 0) return value;
  const [head, ...rest] = at;
  if (typeof head === "number") {
    const list = Array.isArray(node) ? [...node] : [];
    list[head] = putSteps(list[head], rest, value);
    return list;
  }
  const old = node !== null && typeof node === "object" && !Array.isArray(node) ? node : {};
  return { ...old, [head]: putSteps(old[head], rest, value) };
}

/**
 * The plan without what stands at a path; objects that become empty go too, so
 * that a plan put back to its defaults is the plan without a word. List members
 * move up.
 * @param {any} plan
 * @param {string} path
 * @returns {any}
 */
export function drop(plan, path) {
  const out = dropSteps(plan, steps(path));
  return out === undefined ? {} : out;
}

/**
 * The plan without what stands at a path, but with the object at another one kept,
 * were it empty: a part that is there, all of it by default.
 * @param {any} plan
 * @param {string} path
 * @param {string} part
 * @returns {any}
 */
export function dropWithin(plan, path, part) {
  const out = drop(plan, path);
  return part !== "" && get(plan, part) && !get(out, part) ? put(out, part, {}) : out;
}

/**
 * @param {any} node
 * @param {(string | number)[]} at
 * @returns {any}
 */
function dropSteps(node, at) {
  if (node === null || typeof node !== "object") return node;
  const [head, ...rest] = at;
  if (Array.isArray(node)) {
    const list = [...node];
    if (rest.length === 0) list.splice(Number(head), 1);
    else list[Number(head)] = dropSteps(list[Number(head)], rest) ?? {};
    return list.length === 0 ? undefined : list;
  }
  const { [head]: old, ...others } = node;
  const kept = rest.length === 0 ? undefined : dropSteps(old, rest);
  if (kept !== undefined) return { ...node, [head]: kept };
  return Object.keys(others).length === 0 ? undefined : others;
}

/**
 * The diagnosis paths that a row answers for: its own, and those below it.
 * @param {string} fault path of a diagnosis
 * @param {string} row path of a row
 */
export function covers(row, fault) {
  return fault === row || fault.startsWith(`${row}.`) || fault.startsWith(`${row}[`);
}
