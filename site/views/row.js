// One value of the plan: name, field, unit, where it lies in the normal range,
// a way back to the default, a switch where the value may be absent, and what the
// engine says where it is wrong.

import { el, say, uid } from "../base/dom.js";
import { num, typed } from "../base/format.js";
import { clamp } from "../base/scale.js";
import { drop, dropWithin, get, put } from "../model/path.js";
import { rangeBar, valueAt } from "./range.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Field} Field
 */

/**
 * @typedef {object} Row
 * @property {HTMLElement} node
 * @property {Field} field
 * @property {string} path in the plan, with list places filled in
 * @property {(state: State) => void} update
 * @property {(state: State) => boolean} changed from the default
 * @property {(state: State) => boolean} absent: a part of the heart that is switched off
 * @property {() => boolean} wrong
 */

/** How far one press of an arrow key goes, by unit. @type {Record<string, number>} */
const STEP = { ms: 5, "/min": 1, "ms/ms": 0.01, s: 1 };

/**
 * @param {Store} store
 * @param {Field} field
 * @param {object} [about]
 * @param {string} [about.path] where it differs from the field's own
 * @param {string} [about.within] path of the part it belongs to, which may be absent as a
 *   whole. What the plan does not state of such a part is shown as assumed.
 * @param {(state: State) => boolean} [about.idle] whether nothing uses it as things stand
 * @returns {Row}
 */
export function makeRow(store, field, { path = field.path, within = "", idle = () => false } = {}) {
  const id = uid("row");
  const step = STEP[field.unit] ?? (field.max <= 2 ? 0.05 : 1);
  const control = makeControl();
  const bar = rangeBar();
  const assumed = within && el("span", { class: "assumed", title: "The plan does not state it" }, "assumed");
  const off = field.nullable ? el("input", { type: "checkbox", onchange: () => setNull(/** @type {HTMLInputElement} */ (off).checked) }) : null;
  const reset = el("button", {
    type: "button", class: "reset", onclick: () => change(undefined),
    title: standing(field) === undefined ? "Leave out" : `Back to ${told(standing(field))}`, "aria-label": `${field.label}: back to the default`,
  }, "↺");
  const fault = el("p", { class: "row-fault", id: `${id}-fault`, role: "alert" });
  const help = el("span", { class: "unseen", id: `${id}-help` }, describe(field));
  const node = el("div", { class: `row ${field.kind}${within ? " within" : ""}`, "data-path": path },
    field.kind === "group" ? el("span", { class: "name" }, field.label) : el("label", { class: "name", for: id, title: describe(field) }, field.label),
    control, el("span", { class: "unit" }, field.unit ?? ""), bar.node, assumed, reset,
    off && el("label", { class: "off" }, off, field.null ?? "absent"), fault, help);
  bar.node.addEventListener("pointerdown", slide);
  bar.show(null, normal());

  /** @returns {[number, number] | null} */
  function normal() {
    return field.normal ? [field.normal.low, field.normal.high] : null;
  }

  function makeControl() {
    const common = { id, "aria-describedby": `${id}-help ${id}-fault`, "data-field": path };
    if (field.kind === "group") return el("span", null);
    if (field.kind === "switch") {
      return el("input", { ...common, type: "checkbox", onchange: (/** @type {any} */ e) => change(e.target.checked === standing(field) && within === "" ? undefined : e.target.checked) });
    }
    if (field.kind === "choice") {
      return el("select", { ...common, onchange: (/** @type {any} */ e) => change(e.target.value) },
        (field.choices ?? []).map((c) => el("option", { value: c }, field.names?.[c] ?? c)));
    }
    return el("input", {
      ...common, type: "text", class: "value", inputMode: field.kind === "number" ? "decimal" : "text", autocomplete: "off", spellcheck: false,
      placeholder: standing(field) === undefined ? "–" : told(standing(field)), list: field.kind === "mode" ? `modes-${field.path}` : undefined,
      oninput: (/** @type {any} */ e) => write(read(e.target.value)), onkeydown: keys, onfocus: remember,
      onblur: () => {
        store.settle();
        show(store.get(), true);
      },
    });
  }

  /** @param {string} text */
  function read(text) {
    if (field.kind === "mode") return text.trim() === "" ? undefined : text.trim().toUpperCase();
    if (field.kind !== "list") return typed(text);
    const parts = text.split(/[\s,;]+/).filter((p) => p !== "");
    return parts.length === 0 ? undefined : parts.map((p) => typed(p));
  }

  /** @param {any} value */
  function text(value) {
    if (Array.isArray(value)) return value.join(", ");
    if (value === null || value === undefined) return "";
    return typeof value === "number" ? num(value, 3).replace("−", "-") : String(value);
  }

  /** @param {State} state */
  function value(state) {
    const v = get(state.plan, path);
    return v === undefined ? (field.is_null ? null : standing(field)) : v;
  }

  /** Takes a value while it is being typed. @param {any} v */
  function write(v) {
    const { plan } = store.get();
    store.edit(v === undefined ? dropWithin(plan, path, within) : put(plan, path, v), `type ${path}`);
  }

  /** Takes a value as one step. @param {any} v */
  function change(v) {
    store.settle();
    write(v);
    store.settle();
  }

  let away = /** @type {any} */ (undefined); // what stood in a part that was switched off
  /** @param {boolean} on */
  function setNull(on) {
    if (on && field.is_null && field.kind === "group") {
      away = get(store.get().plan, path);
      change(undefined);
    } else if (on) change(null);
    else if (field.is_null) change(field.kind === "group" ? (away ?? {}) : field.min);
    else change(undefined);
  }

  let before = /** @type {any} */ (undefined);
  function remember() {
    before = get(store.get().plan, path);
    /** @type {HTMLInputElement} */ (control).select();
  }

  /** @param {KeyboardEvent} e */
  function keys(e) {
    if (e.key === "Escape") {
      const now = get(store.get().plan, path);
      if (JSON.stringify(now) === JSON.stringify(before)) return; // nothing to put back: the key is for others
      e.stopPropagation();
      write(before);
      show(store.get(), true);
    } else if (e.key === "Enter") {
      store.settle();
      show(store.get(), true);
      /** @type {HTMLInputElement} */ (control).select();
    } else if ((e.key === "ArrowUp" || e.key === "ArrowDown") && field.kind === "number") {
      const v = value(store.get());
      const from = typeof v === "number" ? v : (field.default ?? field.min);
      const by = step * (e.shiftKey ? 10 : 1) * (e.key === "ArrowUp" ? 1 : -1);
      e.preventDefault();
      write(clamp(round(from + by), field.min, field.max));
      show(store.get(), true);
    }
  }

  /** @param {number} v */
  function round(v) {
    return Number((Math.round(v / step) * step).toFixed(4));
  }

  /** Drags the value along the bar. @param {PointerEvent} e */
  function slide(e) {
    const range = normal();
    if (!range || e.button !== 0 || field.kind !== "number") return;
    e.preventDefault();
    bar.node.setPointerCapture(e.pointerId);
    /** @param {PointerEvent} at */
    const to = (at) => {
      const box = bar.node.getBoundingClientRect();
      write(clamp(round(valueAt((at.clientX - box.left) / box.width, range)), field.min, field.max));
    };
    const end = () => {
      bar.node.removeEventListener("pointermove", to);
      store.settle();
    };
    store.settle();
    to(e);
    bar.node.addEventListener("pointermove", to);
    bar.node.addEventListener("lostpointercapture", end, { once: true });
  }

  /** @param {State} state @param {boolean} [afresh] even while it is being typed */
  function show(state, afresh = false) {
    const stated = get(state.plan, path) !== undefined;
    const v = within !== "" && !stated && control instanceof HTMLInputElement && control.type === "text" ? undefined : value(state);
    if (control instanceof HTMLSelectElement) control.value = String(v ?? "");
    else if (control instanceof HTMLInputElement && control.type === "checkbox") control.checked = v === true;
    else if (control instanceof HTMLInputElement) {
      const own = document.activeElement === control && !afresh;
      if (!own || text(read(control.value) ?? v) !== text(v)) control.value = text(v);
      control.disabled = v === null;
    }
    if (off) off.checked = v === null;
    node.classList.toggle("stated", within !== "" && stated);
    const unused = idle(state);
    node.classList.toggle("idle", unused);
    if (assumed) say(assumed, unused ? "not used" : "assumed");
    bar.show(value(state), normal());
  }

  /** @param {State} state */
  function changed(state) {
    const v = get(state.plan, path);
    if (v === undefined || field.kind === "group" && v !== null) return false;
    if (v === null) return !field.is_null;
    return v !== standing(field);
  }

  return {
    node, field, path, changed,
    update(state) {
      show(state);
      node.classList.toggle("changed", changed(state));
      const own = state.diagnoses.filter((d) => d.path === path || (field.kind === "list" && d.path.startsWith(`${path}[`)));
      const words = own.map((d) => d.text).join("\n");
      say(fault, words);
      node.classList.toggle("wrong", own.length > 0);
      if (control instanceof HTMLInputElement || control instanceof HTMLSelectElement) control.setAttribute("aria-invalid", String(own.length > 0));
    },
    absent: (state) => field.kind === "group" && value(state) === null,
    wrong: () => node.classList.contains("wrong"),
  };
}

/**
 * What holds where the plan does not say; undefined where nothing does.
 * @param {Field} f
 * @returns {number | string | boolean | undefined}
 */
export function standing(f) {
  if (f.kind === "switch") return f.on ?? false;
  if (f.kind === "choice" || f.kind === "mode") return f.word || undefined;
  return f.default ?? undefined;
}

/** @param {number | string | boolean | undefined} v */
function told(v) {
  if (typeof v === "number") return num(v, 3);
  return typeof v === "boolean" ? (v ? "on" : "off") : (v ?? "");
}

/**
 * A field in words: meaning, normal range with its source, what may be typed.
 * @param {Field} f
 */
export function describe(f) {
  const unit = f.unit ? ` ${f.unit}` : "";
  const parts = [f.help ?? ""];
  if (f.normal) parts.push(`Normal ${num(f.normal.low)}–${num(f.normal.high)}${unit}${f.source ? ` (${f.source})` : ""}.`);
  if (f.kind === "number") parts.push(`${f.default === null ? "Left out by default" : `Default ${num(f.default, 3)}`}; from ${num(f.min)} to ${num(f.max)}${unit}.`);
  else if (["switch", "choice", "mode"].includes(f.kind) && standing(f) !== undefined) parts.push(`Default: ${f.names?.[String(standing(f))] ?? told(standing(f))}.`);
  return parts.filter((p) => p !== "").join(" ");
}
