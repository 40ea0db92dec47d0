// A plan as text: what a file or a link holds, read so that nothing in it is lost
// silently, and written. The engine judges the values; here only what a page cannot
// hold at all is refused. Holds no DOM.

/** @typedef {import("./path.js").Plan} Plan */

export const FORMAT = "escapement-plan/1";

/** The plan of a healthy adult. @type {Plan} */
export const EMPTY = { format: FORMAT };

/** Largest plan file that is opened, as in the engine. */
export const MAX_BYTES = 4 << 20;

/** A plan is four objects deep; what is far deeper is no plan. */
const MAX_DEPTH = 32;

/** A text that is not a plan, in words. */
export class NotAPlan extends Error {}

/**
 * Reads a text as a plan. Values that are wrong stay as they are, for the engine to
 * name them at their fields.
 * @param {string} text
 * @returns {{plan: Plan, told: string[]}} told: what could not be taken over as it stands
 * @throws {NotAPlan}
 */
export function readPlan(text) {
  if (text.length > MAX_BYTES) throw new NotAPlan(`It has more than ${MAX_BYTES} letters; allowed: up to ${MAX_BYTES}.`);
  /** @type {string[]} */
  const told = [];
  let value;
  try {
    value = JSON.parse(text.replace(/^\uFEFF/, ""));
  } catch (err) {
    throw new NotAPlan(`It is not JSON${place(text, err)}: ${/** @type {Error} */ (err).message}.`);
  }
  if (value === null || typeof value !== "object" || Array.isArray(value)) throw new NotAPlan(`It holds ${short(value)}; allowed: an object such as {"format":"${FORMAT}"}.`);
  if (depth(value, 0) > MAX_DEPTH) throw new NotAPlan(`It is nested more than ${MAX_DEPTH} deep.`);
  if (value.format !== FORMAT) throw new NotAPlan(`Its format is ${short(value.format)}; allowed: "${FORMAT}".`);
  return { plan: finite(value, "", told), told };
}

/**
 * A plan as the text of a file.
 * @param {Plan} plan
 */
export function writePlan(plan) {
  return `${JSON.stringify({ format: FORMAT, ...plan }, null, 2)}\n`;
}

/**
 * What a plan is called.
 * @param {Plan} plan
 * @param {{title: string} | null} answer
 */
export function titleOf(plan, answer) {
  return String(plan.title || answer?.title || "A heart of your own");
}

/**
 * A name for the plan's file: its title in plain letters.
 * @param {Plan} plan
 * @param {string} title where the plan has none
 */
export function fileName(plan, title) {
  const plain = String(plan.title || title).toLowerCase().normalize("NFKD").replace(/[^a-z0-9]+/g, "-").replace(/^-+|-+$/g, "").slice(0, 60);
  return `${plain || "plan"}.json`;
}

/**
 * JSON may hold numbers that no page can: they become their words, which the engine
 * refuses at their field, instead of nothing.
 * @param {any} value
 * @param {string} path
 * @param {string[]} told
 * @returns {any}
 */
function finite(value, path, told) {
  if (typeof value === "number" && !Number.isFinite(value)) {
    told.push(`${path} holds a number larger than can be kept.`);
    return value > 0 ? "too large a number" : "too small a number";
  }
  if (Array.isArray(value)) return value.map((v, i) => finite(v, `${path}[${i}]`, told));
  if (value === null || typeof value !== "object") return value;
  return Object.fromEntries(Object.entries(value).map(([k, v]) => [k, finite(v, path ? `${path}.${k}` : k, told)]));
}

/**
 * How deep a value is nested, as far as it matters.
 * @param {any} value
 * @param {number} at
 * @returns {number}
 */
function depth(value, at) {
  if (value === null || typeof value !== "object" || at > MAX_DEPTH) return at;
  let deepest = at;
  for (const v of Object.values(value)) deepest = Math.max(deepest, depth(v, at + 1));
  return deepest;
}

/** @param {any} value */
function short(value) {
  if (value === undefined) return "nothing";
  const text = JSON.stringify(value);
  return text.length > 60 ? `${text.slice(0, 60)}…` : text;
}

/**
 * Line and column of a syntax error, where the browser says its position.
 * @param {string} text
 * @param {unknown} err
 */
function place(text, err) {
  const at = /position (\d+)/.exec(String(err))?.[1];
  if (at === undefined) return "";
  const before = text.slice(0, Number(at));
  return ` (line ${before.split("\n").length}, column ${before.length - before.lastIndexOf("\n")})`;
}
