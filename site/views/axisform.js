// One axis of a sweep, or one setting of a search: what varies, and over what.

import { el, fill, uid } from "../base/dom.js";
import { typed } from "../base/format.js";
import { axisOver, pathOf, variables } from "../model/sweep.js";
import { fieldPick } from "./fieldpick.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/sweep.js").Axis} Axis
 * @typedef {import("../model/sweep.js").Variable} Variable
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 */

/** @typedef {ReturnType<typeof axisForm>} AxisForm */

/**
 * @param {object} about
 * @param {string} about.name
 * @param {Store} about.store
 * @param {Catalogue} about.catalogue
 * @param {(axis: Axis, stroke: string) => void} about.write
 * @param {(v: Variable) => boolean} [about.allow]
 * @param {() => void} [about.remove]
 */
export function axisForm({ name, store, catalogue, write, allow = () => true, remove }) {
  let axis = /** @type {Axis | undefined} */ (undefined);
  let made = ""; // path and kind that the range fields stand for
  const sites = new Map(catalogue.sites.map((s) => [s.name, s.label]));
  const all = () => variables(catalogue, store.get().plan).filter(allow);
  const pick = fieldPick(name, all, (path) => {
    const v = all().find((c) => c.path === path);
    if (v) write(axisOver(v, store.get().plan, catalogue), "");
  });
  const away = remove && el("button", { type: "button", class: "axis-remove", "aria-label": `${name}: remove`, onclick: remove }, "Remove");
  const range = el("div", { class: "axis-range" });
  const where = el("p", { class: "axis-where" });
  const node = el("fieldset", { class: "axis" },
    el("legend", null, name),
    el("div", { class: "axis-pick" }, pick.node, away),
    where, range);

  /** @type {{key: "from" | "to" | "step" | "after_ms", input: HTMLInputElement}[]} */
  let numbers = [];
  /** @type {HTMLInputElement | null} */
  let text = null;
  /** @type {HTMLInputElement[]} */
  let boxes = [];

  /** @param {"from" | "to" | "step" | "after_ms"} key @param {string} label @param {string} unit */
  function number(key, label, unit) {
    const id = uid("axis");
    const input = el("input", {
      type: "text", id, inputMode: "decimal", autocomplete: "off", class: "value", "data-axis": key,
      oninput: () => axis && write({ ...axis, [key]: typed(input.value) ?? null }, `${name} ${key}`),
      onblur: () => store.settle(),
    });
    numbers.push({ key, input });
    return el("span", { class: "axis-number" }, el("label", { for: id }, label), input, unit && el("span", { class: "unit" }, unit));
  }

  /** @param {Variable | undefined} v */
  function build(v) {
    numbers = [];
    boxes = [];
    text = null;
    if (!axis) return fill(range);
    const unit = v?.field.unit ?? "";
    if (axis.values === undefined) {
      return fill(range, number("from", "from", ""), number("to", "to", ""), number("step", "by", unit), axis.premature !== undefined && number("after_ms", "to the beat after", "ms"));
    }
    if (v?.field.kind === "choice") {
      const names = v.field.names ?? {};
      boxes = (v.field.choices ?? []).map((c) => el("input", { type: "checkbox", value: c, onchange: () => axis && write({ ...axis, values: boxes.filter((b) => b.checked).map((b) => b.value) }, "") }));
      return fill(range, el("div", { class: "axis-boxes" }, boxes.map((b) => el("label", null, b, names[b.value] ?? sites.get(b.value) ?? b.value.replaceAll("_", " ")))));
    }
    if (v?.field.kind === "switch" || v?.field.kind === "group") return fill(range, el("p", { class: "axis-where" }, v.field.kind === "switch" ? "off and on" : "present and absent"));
    text = el("input", {
      type: "text", class: "value wide", autocomplete: "off", "aria-label": `${name}: values, separated by commas`,
      oninput: () => axis && write({ ...axis, values: (text?.value ?? "").split(/[\s,;]+/).filter((p) => p !== "").map((p) => typed(p)) }, `${name} values`),
      onblur: () => store.settle(),
    });
    return fill(range, el("span", { class: "axis-number" }, text, unit && el("span", { class: "unit" }, unit)));
  }

  return {
    node,
    /** Whether there is something to remove. @param {boolean} on */
    removable(on) {
      if (away) away.hidden = !on;
    },
    /** @param {Axis | undefined} now */
    update(now) {
      axis = now;
      const path = pathOf(now);
      const v = now && all().find((c) => c.path === path);
      pick.show(!now ? "" : (v?.label ?? path));
      where.textContent = v ? v.where : now ? "this plan has no such value" : "";
      const shape = `${path} ${now?.values === undefined}`;
      if (shape !== made) {
        made = shape;
        build(v);
      }
      for (const { key, input } of numbers) if (document.activeElement !== input) input.value = String(now?.[key] ?? (key === "after_ms" ? 0 : ""));
      for (const b of boxes) b.checked = now?.values?.includes(b.value) ?? false;
      if (text && document.activeElement !== text) text.value = (now?.values ?? []).map((x) => (x === null ? "null" : String(x))).join(", ");
    },
  };
}
