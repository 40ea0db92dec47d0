// How long the parts of a step took: the last few hundred of each, kept in memory for
// the benchmark of the page. Nothing of it is stored or sent. Imports nothing.

const KEPT = 400;

/** @type {Map<string, number[]>} */
export const timings = new Map();

/**
 * @param {string} part "engine" the worker's own time, of it "compute" without the drawing,
 *   "transfer" there and back, "read" the reply, "paint"
 * @param {number} ms
 */
export function note(part, ms) {
  let list = timings.get(part);
  if (!list) timings.set(part, (list = []));
  list.push(ms);
  if (list.length > KEPT) list.shift();
}
