// A plan's sweep as it is edited: which values of the plan may vary, over what range,
// and when a map no longer belongs to the plan. The engine judges the rest. No DOM.

import { words } from "../base/format.js";
import { get, put } from "./path.js";

/** @typedef {import("./path.js").Plan} Plan */
/** @typedef {import("../engine/wire.js").Field} Field */
/** @typedef {import("../engine/wire.js").Catalogue} Catalogue */
/** @typedef {{field?: string, premature?: string, after_ms?: number, from?: any, to?: any, step?: any, values?: any[]}} Axis */
/** @typedef {{path: string, label: string, where: string, field: Field}} Variable */

const COUPLING = "coupling at ";

/** What an axis of an extra stimulus holds. @type {Field} */
const coupling = { path: "coupling", label: "coupling of a premature beat", unit: "ms", kind: "number", min: 1, max: 60000, default: 400, normal: null };

/**
 * All that may vary in a plan: the values of its fields, those of its items, and the
 * coupling of a premature beat.
 * @param {Catalogue} catalogue
 * @param {Plan} plan
 * @returns {Variable[]}
 */
export function variables(catalogue, plan) {
  /** @type {Variable[]} */
  const out = [];
  for (const field of catalogue.fields) {
    if (field.kind === "list" || (field.kind === "group" && (!field.is_null && !field.nullable || field.path === "pacemaker"))) continue;
    if (field.path.startsWith("pacemaker.") && get(plan, "pacemaker") == null) continue;
    const [list, rest] = field.path.split("[].");
    if (rest === undefined) {
      if (field.unit || field.kind !== "any") out.push({ path: field.path, label: field.label, where: place(field.path), field });
      continue;
    }
    const items = get(plan, list);
    if (Array.isArray(items)) items.forEach((item, i) => {
      if (item?.[rest] === undefined) return;
      const path = `${list}[${i}].${rest}`;
      out.push({ path, label: field.label, where: `${words(list.split(".").pop() ?? "")} ${i + 1}${item.do ? `, ${words(item.do)}` : ""}`, field });
    });
  }
  for (const s of catalogue.sites) out.push({ path: COUPLING + s.name, label: "coupling of a premature beat", where: s.label, field: coupling });
  return out;
}

/** @param {string} path */
function place(path) {
  return path.split(".").slice(0, -1).map(words).join(", ") || "plan";
}

/** The path by which an axis is known. @param {Axis | undefined} axis */
export const pathOf = (axis) => (!axis ? "" : axis.premature !== undefined ? COUPLING + axis.premature : (axis.field ?? ""));

/**
 * An axis over a value, with a range that begins and ends about what is normal and
 * about what the plan has, in some forty steps.
 * @param {Variable} v
 * @param {Plan} plan
 * @param {Catalogue} catalogue
 * @returns {Axis}
 */
export function axisOver(v, plan, catalogue) {
  if (v.path.startsWith(COUPLING)) return { premature: v.path.slice(COUPLING.length), after_ms: 3000, from: 250, to: 900, step: 10 };
  const { field } = v;
  const own = get(plan, v.path);
  const axis = { field: v.path };
  if (field.kind === "switch") return { ...axis, values: [false, true] };
  if (field.kind === "choice") return { ...axis, values: field.path.includes("site") ? (field.choices ?? []).slice(0, 8) : field.choices };
  if (field.kind === "group") return { ...axis, values: ["default", null] };
  if (field.kind === "mode") return { ...axis, values: ["DDD", "VVI", "AAI"].filter((m) => catalogue.modes.includes(m)) };
  if (field.kind === "pattern") return { ...axis, values: ["4:3", "3:2", "2:1"] };
  const at = typeof own === "number" ? own : (field.default ?? field.normal?.low ?? field.min);
  const low = Math.max(field.min, Math.min(field.normal?.low ?? Infinity, at * 0.6));
  const high = Math.min(field.max, Math.max(field.normal?.high ?? -Infinity, at * 1.6, low + (field.max - field.min) * 0.02));
  const step = Math.max(nice((high - low) / 40), field.unit === "ms" || field.unit === "/min" ? 1 : 0);
  const from = Math.max(field.min, tidy(Math.floor(low / step) * step));
  return { ...axis, from, to: Math.min(field.max, tidy(Math.ceil(high / step) * step)), step };
}

/** The next of 1, 2 and 5 times a power of ten. @param {number} x */
export function nice(x) {
  const ten = 10 ** Math.floor(Math.log10(x));
  const m = x / ten;
  return tidy((m <= 1.0001 ? 1 : m <= 2 ? 2 : m <= 5 ? 5 : 10) * ten);
}

/** @param {number} x */
export const tidy = (x) => Number(x.toFixed(6));

/** How many values an axis has; 0 where it cannot be told. @param {Axis | undefined} axis */
export function valueCount(axis) {
  if (!axis) return 1;
  if (Array.isArray(axis.values)) return axis.values.length;
  const n = Math.floor((axis.to - axis.from) / axis.step + 1e-9) + 1;
  return Number.isFinite(n) && n > 0 ? n : 0;
}

/**
 * What a map depends on: the plan without its words, without the values that the sweep
 * sets itself. Two plans with the same key have the same map.
 * @param {Plan} plan
 */
export function mapKey(plan) {
  const { title: _, note: __, goals: ___, ...rest } = plan;
  let out = rest;
  for (const axis of [plan.sweep?.x, plan.sweep?.y]) {
    if (axis?.field && get(out, axis.field) !== undefined) out = put(out, axis.field, null);
    else if (axis?.field) out = put(out, axis.field, null);
  }
  return JSON.stringify(sorted(out));
}

/** The same with the keys in order: an edit may write them in another. @param {any} v @returns {any} */
function sorted(v) {
  if (Array.isArray(v)) return v.map(sorted);
  if (v === null || typeof v !== "object") return v;
  return Object.fromEntries(Object.keys(v).sort().map((k) => [k, sorted(v[k])]));
}

/**
 * The plan of a point: the values of its axes put in.
 * @param {Plan} plan with the sweep
 * @param {any[]} values x and then y
 * @returns {Plan}
 */
export function planAt(plan, values) {
  let out = plan;
  [plan.sweep?.x, plan.sweep?.y].forEach((axis, i) => {
    if (!axis?.field) return;
    const v = values[i];
    if (v === "default" && typeof get(out, axis.field) !== "string") {
      if (get(out, axis.field) === null) out = put(out, axis.field, {});
    } else out = put(out, axis.field, v);
  });
  return out;
}
