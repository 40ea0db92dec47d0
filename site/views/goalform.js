// Goals of a plan, edited: settings to search, situations to stand, what must hold,
// what is preferred. All of it is the plan's "goals", so files and links carry it.

import { el, fill, uid } from "../base/dom.js";
import { typed } from "../base/format.js";
import { firstGoals, renamed, without } from "../model/goals.js";
import { drop } from "../model/path.js";
import { axisOver, pathOf, variables } from "../model/sweep.js";
import { axisForm } from "./axisform.js";
import { fieldPick } from "./fieldpick.js";
import { valueText } from "./mapwords.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 * @typedef {import("../model/goals.js").Goals} Goals
 * @typedef {import("../model/goals.js").Goal} Goal
 * @typedef {import("../model/goals.js").Wish} Wish
 */

/** Words that come up, to choose from; others may be typed. @type {Record<string, string>} */
const WORDS = { pattern: "1:1", endless_loop: "none, brief", va_synchrony: "none, ended" };

/**
 * @param {Store} store
 * @param {Catalogue} catalogue
 */
export function goalForm(store, catalogue) {
  const goals = () => /** @type {Goals} */ (store.get().plan.goals ?? firstGoals(store.get().plan));
  /** @param {Goals} g @param {string} stroke */
  const write = (g, stroke) => store.edit({ ...store.get().plan, goals: g }, stroke && `goals ${stroke}`);
  /** @param {"settings" | "situations" | "must" | "prefer"} list @param {number} i @param {any} item @param {string} stroke */
  const put = (list, i, item, stroke) => write({ ...goals(), [list]: (goals()[list] ?? []).map((/** @type {any} */ x, /** @type {number} */ k) => (k === i ? item : x)) }, stroke && `${list} ${i} ${stroke}`);
  /** @param {"settings" | "situations" | "must" | "prefer"} list @param {any} item */
  const add = (list, item) => write({ ...goals(), [list]: [...(goals()[list] ?? []), item] }, "");
  /** @param {"settings" | "situations" | "must" | "prefer"} list @param {number} i */
  const remove = (list, i) => write(without(goals(), list, i), "");

  const parts = { settings: el("div", null), situations: el("div", null), must: el("div", null), prefer: el("div", null) };
  const node = el("div", { class: "goals" },
    part("What may be programmed", parts.settings, "Add a setting", () => {
      const taken = new Set(goals().settings.map(pathOf));
      const next = variables(catalogue, store.get().plan).find((v) => v.field.kind === "number" && !v.field.advanced && v.path.startsWith("pacemaker.") && !taken.has(v.path)) ?? variables(catalogue, store.get().plan).find((v) => v.field.kind === "number" && !taken.has(v.path));
      if (next) add("settings", axisOver(next, store.get().plan, catalogue));
    }),
    part("Situations to stand", parts.situations, "Add a situation", () => add("situations", { name: `situation ${goals().situations.length + 1}` })),
    part("What must hold", parts.must, "Add a goal", () => add("must", { outcome: "longest_pause_ms", at_most: 1500 })),
    part("What is preferred, the first first", parts.prefer, "Add a preference", () => add("prefer", { outcome: "ventricular_paced_percent", best: "lowest" })));

  /** @param {string} title @param {HTMLElement} body @param {string} label @param {() => void} act */
  function part(title, body, label, act) {
    return el("section", { class: "goals-part" }, el("h3", null, title), body, el("button", { type: "button", class: "add", onclick: act }, `+ ${label}`));
  }

  /** @param {string} text @param {any} value @param {(v: any) => void} take @param {string} [unit] */
  function box(text, value, take, unit = "") {
    const id = uid("goal");
    return el("span", { class: "axis-number" }, el("label", { for: id }, text),
      el("input", { id, type: "text", class: unit === "words" ? "value wide" : "value", autocomplete: "off", value: value === undefined ? "" : Array.isArray(value) ? value.join(", ") : value === null ? "" : String(value), oninput: (/** @type {any} */ e) => take(e.target.value), onblur: () => store.settle() }),
      unit && unit !== "words" && el("span", { class: "unit" }, unit));
  }

  /** @param {string} label @param {[string, string][]} options @param {string} value @param {(v: string) => void} take */
  function choose(label, options, value, take) {
    return el("select", { "aria-label": label, onchange: (/** @type {any} */ e) => take(e.target.value) },
      options.map(([v, text]) => el("option", { value: v, selected: v === value }, text)));
  }

  /** @param {string} label @param {() => void} act */
  const away = (label, act) => el("button", { type: "button", class: "axis-remove", "aria-label": `${label}: remove`, onclick: act }, "Remove");

  /** In which situations. @param {string} label @param {{in?: string[]}} item @param {(item: any) => void} take */
  function within(label, item, take) {
    const names = goals().situations.map((s) => s.name);
    if (names.length < 2) return null;
    const { in: among, ...rest } = item;
    return choose(`${label}: in which situations`, [["", "in all situations"], ...names.map((n) => /** @type {[string, string]} */ ([n, `in: ${n}`])), ...(among && among.length > 1 ? [/** @type {[string, string]} */ (["*", `in: ${among.join(", ")}`])] : [])],
      !among ? "" : among.length > 1 ? "*" : among[0], (v) => v !== "*" && take(v === "" ? rest : { ...rest, in: [v] }));
  }

  /** @param {Goal} g @param {number} i */
  function goal(g, i) {
    const about = catalogue.outcomes.find((o) => o.name === g.outcome);
    const label = `Goal ${i + 1}`;
    /** @param {string} k @param {any} v */
    const set = (k, v) => {
      const { [k]: _, ...rest } = /** @type {any} */ (goals().must?.[i]);
      put("must", i, v === undefined || (Array.isArray(v) && v.length === 0) ? rest : { ...rest, [k]: v }, k);
    };
    const list = (/** @type {string} */ text) => text.split(",").map((w) => w.trim()).filter((w) => w !== "");
    return el("div", { class: "goal", role: "group", "aria-label": label },
      choose(`${label}: outcome`, catalogue.outcomes.map((o) => [o.name, o.label]), g.outcome, (name) => {
        const kind = catalogue.outcomes.find((o) => o.name === name)?.kind;
        put("must", i, { outcome: name, ...(g.in && { in: g.in }), ...(kind === "number" ? { at_most: 0 } : kind === "word" ? { equal: list(WORDS[name] ?? "none") } : { none_of: ["endless_loop"] }) }, "");
      }),
      about?.kind === "number" ? [box("at least", g.at_least, (v) => set("at_least", typed(v))), box("at most", g.at_most, (v) => set("at_most", typed(v)), about.unit)]
        : about?.kind === "word" ? [(!g.none_of || g.equal) && box("any of", g.equal, (v) => set("equal", list(v)), "words"), (g.none_of || !g.equal) && box("none of", g.none_of, (v) => set("none_of", list(v)), "words")]
          : box("none of", g.none_of, (v) => set("none_of", list(v)), "words"),
      within(label, g, (item) => put("must", i, item, "")), away(label, () => remove("must", i)));
  }

  /** @param {Wish} w @param {number} i */
  function wish(w, i) {
    const label = `Preference ${i + 1}`;
    const settings = goals().settings.map(pathOf);
    const naming = new Map(variables(catalogue, store.get().plan).map((v) => [v.path, v.label]));
    return el("div", { class: "goal", role: "group", "aria-label": label },
      choose(`${label}: lowest or highest`, [["lowest", "lowest"], ["highest", "highest"]], w.best, (best) => put("prefer", i, { ...w, best }, "")),
      choose(`${label}: of what`, [...catalogue.outcomes.filter((o) => o.kind === "number").map((o) => /** @type {[string, string]} */ ([o.name, o.label])), ...settings.map((p) => /** @type {[string, string]} */ ([`=${p}`, `setting: ${naming.get(p) ?? p}`]))],
        w.setting ? `=${w.setting}` : (w.outcome ?? ""), (v) => put("prefer", i, v.startsWith("=") ? { setting: v.slice(1), best: w.best } : { outcome: v, ...(w.in && { in: w.in }), best: w.best }, "")),
      !w.setting && within(label, w, (item) => put("prefer", i, item, "")), away(label, () => remove("prefer", i)));
  }

  /** @param {import("../model/goals.js").Situation} s @param {number} i */
  function situation(s, i) {
    const label = `Situation ${i + 1}`;
    const known = variables(catalogue, store.get().plan);
    const naming = new Map(known.map((v) => [v.path, v]));
    const pick = fieldPick(`${label}: another value`, () => known.filter((v) => !v.path.startsWith("coupling")), (path) => {
      const v = naming.get(path);
      put("situations", i, { ...s, set: { ...s.set, [path]: v?.field.default ?? v?.field.normal?.low ?? null } }, "");
    });
    const vary = axisForm({
      name: `${label}: at every`, store, catalogue, write: (axis, stroke) => put("situations", i, { ...goals().situations[i], vary: axis }, stroke && `vary ${stroke}`),
      remove: () => put("situations", i, drop(s, "vary"), ""),
    });
    vary.update(s.vary);
    vary.removable(s.vary !== undefined);
    const beats = s.interventions ?? [];
    return el("div", { class: "situation", role: "group", "aria-label": label },
      el("div", { class: "goal" }, box("called", s.name, (v) => write(renamed(goals(), i, v), `situation ${i}`), "words"), away(label, () => remove("situations", i))),
      Object.entries(s.set ?? {}).map(([path, v]) => el("div", { class: "goal" }, el("span", null, naming.get(path)?.label ?? path),
        box("is", v === null ? "absent" : v, (t) => put("situations", i, { ...goals().situations[i], set: { ...goals().situations[i].set, [path]: t.trim() === "absent" ? null : (typed(t) ?? "") } }, path), naming.get(path)?.field.unit),
        away(`${label}, ${naming.get(path)?.label ?? path}`, () => {
          const { [path]: _, ...set } = s.set ?? {};
          const { set: __, ...rest } = s;
          put("situations", i, Object.keys(set).length === 0 ? rest : { ...rest, set }, "");
        }))),
      beats.map((b, k) => el("div", { class: "goal" }, el("span", null, Object.entries(b).map(([n, v]) => `${n.replaceAll("_", " ")} ${valueText(v)}`).join(", ")),
        away(`${label}, what is done ${k + 1}`, () => {
          const { interventions: _, ...rest } = s;
          const left = beats.filter((_x, j) => j !== k);
          put("situations", i, left.length === 0 ? rest : { ...rest, interventions: left }, "");
        }))),
      el("details", { class: "situation-more", open: s.vary !== undefined }, el("summary", null, "More to this situation"),
        el("p", { class: "axis-where" }, "Another value of the plan"), pick.node,
        el("div", { class: "goal" }, ["atrial", "ventricular"].map((c) => el("button", {
          type: "button", class: "add",
          onclick: () => put("situations", i, { ...s, interventions: [...beats, { at_ms: 3000, do: "stimulate", site: c === "atrial" ? "right_atrium" : "rv_apex" }] }, ""),
        }, `+ ${c} premature beat at 3000 ms`))),
        vary.node));
  }

  /** @type {import("./axisform.js").AxisForm[]} */
  let settings = [];
  let made = "";
  return {
    node,
    /** @param {State} state */
    update(state) {
      const now = goals();
      const key = JSON.stringify([now, state.plan.goals === undefined]);
      if (key === made) return;
      made = key;
      if (settings.length !== now.settings.length) {
        settings = now.settings.map((_, i) => axisForm({
          name: `Setting ${i + 1}`, store, catalogue, write: (axis, stroke) => put("settings", i, axis, stroke),
          allow: (v) => !v.path.startsWith("coupling") && goals().settings.every((s, k) => k === i || pathOf(s) !== v.path), remove: () => remove("settings", i),
        }));
        fill(parts.settings, settings.map((s) => s.node));
      }
      settings.forEach((s, i) => {
        s.update(now.settings[i]);
        s.removable(now.settings.length > 1);
      });
      for (const [list, build] of /** @type {["situations" | "must" | "prefer", (x: any, i: number) => HTMLElement][]} */ ([["situations", situation], ["must", goal], ["prefer", wish]])) rebuild(parts[list], (now[list] ?? []).map(build));
    },
  };
}

/**
 * Puts other rows in place, and the focus and what is being typed back where they were.
 * @param {HTMLElement} root @param {HTMLElement[]} rows
 */
function rebuild(root, rows) {
  const all = () => [...root.querySelectorAll("input, select, button, summary")];
  const at = document.activeElement ? all().indexOf(document.activeElement) : -1;
  const old = /** @type {HTMLInputElement | null} */ (document.activeElement);
  const open = [...root.querySelectorAll("details")].map((d) => d.open);
  const [text, caret] = at >= 0 && old instanceof HTMLInputElement ? [old.value, old.selectionStart] : [null, null];
  fill(root, rows);
  root.querySelectorAll("details").forEach((d, i) => {
    d.open ||= open[i] ?? false;
  });
  const now = /** @type {HTMLInputElement | undefined} */ (all()[at]);
  if (!now) return;
  if (text !== null && now instanceof HTMLInputElement) now.value = text;
  now.focus();
  if (caret !== null && now instanceof HTMLInputElement && now.type === "text") now.setSelectionRange(caret, caret);
}
