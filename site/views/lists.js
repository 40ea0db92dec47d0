// The lists of a plan: foci, accessory pathways, interventions. Items are built anew only
// when their number or their shape changes, so that typing keeps its place.

import { el, fill } from "../base/dom.js";
import { drop, get, put } from "../model/path.js";
import { shown } from "../model/view.js";
import { headingOf } from "./device.js";
import { makeRow } from "./row.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 * @typedef {import("../engine/wire.js").Field} Field
 * @typedef {import("./row.js").Row} Row
 */

/**
 * @param {Store} store
 * @param {object} list
 * @param {string} list.at path of the list
 * @param {(item: any) => string} list.title
 * @param {(item: any) => Field[]} list.fields
 * @param {{label: string, make: () => any, when?: (plan: any) => boolean}[]} list.adds
 * @param {(item: any) => string} list.shape what, if it changes, asks for new rows
 */
function listView(store, list) {
  const items = el("div", { class: "items" });
  const adds = list.adds.map((a) => el("button", { type: "button", class: "add", onclick: () => add(a.make()) }, `+ ${a.label}`));
  const node = el("section", { class: "list", "data-list": list.at }, items, el("div", { class: "adds" }, adds));
  /** @type {Row[]} */
  let rows = [];
  let built = "";

  const current = () => {
    const v = get(store.get().plan, list.at);
    return Array.isArray(v) ? v : [];
  };

  /** @param {any} item */
  function add(item) {
    const n = current().length;
    store.settle();
    store.edit(put(store.get().plan, `${list.at}[${n}]`, item), "");
    // Its rows are built in the next frame; then the hand goes on in the new item.
    requestAnimationFrame(() => requestAnimationFrame(() => {
      const own = items.children[n];
      own?.scrollIntoView({ block: "nearest" });
      /** @type {HTMLElement | null} */ (own?.querySelector("input.value"))?.focus();
    }));
  }

  /** @param {number} i */
  function remove(i) {
    store.settle();
    store.edit(drop(store.get().plan, `${list.at}[${i}]`), "");
  }

  /** @param {any[]} all */
  function build(all) {
    rows = [];
    fill(items, all.map((item, i) => {
      const own = list.fields(item).map((f) => makeRow(store, f, { path: f.path.replace("[]", `[${i}]`) }));
      rows.push(...own);
      return el("div", { class: "item" },
        el("div", { class: "item-head" }, el("span", null, list.title(item)),
          el("button", { type: "button", class: "remove", onclick: () => remove(i), "aria-label": `Remove ${list.title(item)} ${i + 1}` }, "remove")),
        own.map((r) => r.node));
    }));
  }

  return {
    node,
    count: () => current().length,
    /** @param {State} state */
    update(state) {
      const all = current();
      list.adds.forEach((a, i) => {
        adds[i].hidden = a.when !== undefined && !a.when(state.plan);
      });
      const shape = all.map(list.shape).join("|") + all.length;
      if (shape !== built) {
        built = shape;
        build(all);
      }
      for (const r of rows) r.update(state);
    },
  };
}

/**
 * @param {Catalogue} catalogue
 * @param {string} prefix
 */
function itemFields(catalogue, prefix) {
  const names = { ...Object.fromEntries(catalogue.sites.map((s) => [s.name, s.label])), A: "atrium", V: "ventricle" };
  return catalogue.fields.filter((f) => f.path.startsWith(prefix)).map((f) => (f.kind === "choice" && /[.](site|channel|atrium|ventricle)$/.test(f.path) ? { ...f, names } : f));
}

/**
 * @param {Store} store
 * @param {Catalogue} catalogue
 */
export function fociView(store, catalogue) {
  const fields = itemFields(catalogue, "heart.foci[].");
  const label = (/** @type {string} */ site) => catalogue.sites.find((s) => s.name === site)?.label ?? site;
  const list = listView(store, {
    at: "heart.foci",
    title: (item) => `Focus: ${label(item?.site)}`,
    fields: () => fields,
    shape: (item) => String(item?.site),
    adds: [
      { label: "junctional focus", make: () => ({ site: "av_junction", rate_bpm: 45 }) },
      { label: "ventricular focus", make: () => ({ site: "rv_apex", rate_bpm: 32 }) },
    ],
  });
  list.node.prepend(el("h4", null, "Foci"));
  return list;
}

/**
 * @param {Store} store
 * @param {Catalogue} catalogue
 */
export function pathwaysView(store, catalogue) {
  const fields = itemFields(catalogue, "heart.pathways[].");
  const label = (/** @type {string} */ site) => catalogue.sites.find((s) => s.name === site)?.label ?? site;
  const list = listView(store, {
    at: "heart.pathways",
    title: (item) => `Pathway: ${label(item?.ventricle)}`,
    fields: () => fields,
    shape: (item) => String(item?.ventricle),
    adds: [
      { label: "concealed pathway", make: () => ({ atrium: "left_atrium", ventricle: "lv_lateral", down_ms: null }) },
      { label: "pathway that pre-excites", make: () => ({ atrium: "atrial_septum", ventricle: "lv_posterior" }) },
    ],
  });
  list.node.prepend(el("h4", null, "Accessory pathways"));
  return list;
}

/** What an intervention is called, and the fields that belong to it. @type {Record<string, {name: string, fields: string[]}>} */
const DEEDS = {
  stimulate: { name: "Premature beat", fields: ["at_ms", "site"] },
  train: { name: "Train", fields: ["at_ms", "site", "cycle_ms", "count", "extras_ms"] },
  set: { name: "Change", fields: ["at_ms", "field", "to", "over_ms"] },
  lose_capture: { name: "Loss of capture", fields: ["at_ms", "channel", "for_ms"] },
  undersense: { name: "Undersensing", fields: ["at_ms", "channel", "for_ms"] },
  fracture: { name: "Broken lead", fields: ["at_ms", "channel", "for_ms"] },
  dislodge: { name: "Dislodged lead", fields: ["at_ms", "channel", "site"] },
  signal: { name: "Signals from outside", fields: ["at_ms", "channel", "cycle_ms", "count"] },
};

/**
 * @param {Store} store
 * @param {Catalogue} catalogue
 */
export function interventionsView(store, catalogue) {
  const fields = itemFields(catalogue, "interventions[].");
  const numbers = catalogue.fields.filter((f) => !f.path.includes("[]") && !f.curve &&
    (f.path.startsWith("heart.") ? f.kind === "number" || (f.kind === "group" && f.nullable) : f.path.startsWith("pacemaker.") && f.kind === "number"));
  const names = Object.fromEntries(numbers.map((f) => [f.path, f.path.startsWith("heart.") ? `${place(f.path)}${f.label}` : `device, ${headingOf(f.path)}${f.label}`]));

  /** @param {any} item */
  function own(item) {
    const deed = DEEDS[item?.do];
    const target = numbers.find((f) => f.path === item?.field);
    return (deed?.fields ?? ["at_ms", "do"]).flatMap((name) => {
      const f = fields.find((x) => x.path === `interventions[].${name}`);
      if (!f) return [];
      if (name === "count" && item?.do === "signal") return [{ ...f, label: "signals" }];
      if (name === "field") return [{ ...f, choices: numbers.filter((n) => n.path.startsWith("heart.") || paced(store.get().plan)).map((n) => n.path), names }];
      if (name === "over_ms" && target?.path.startsWith("pacemaker.") && item.over_ms === undefined) return [];
      if (name === "to" && target) {
        return [{ ...f, label: "to", unit: target.unit, kind: /** @type {const} */ ("number"), min: target.min, max: target.max, normal: target.normal, default: null, nullable: target.nullable, null: target.null, is_null: false }];
      }
      return [f];
    });
  }

  /** A round instant in the middle of what is shown, or just after the selected event. */
  function now() {
    const { view, account, selected, answer } = store.get();
    const t = selected && account ? account.t_ms + 300 : view.t0_ms + Math.min(shown(view), answer?.span_ms ?? 12000) / 2;
    return Math.round(t / 10) * 10;
  }

  return listView(store, {
    at: "interventions",
    title: (item) => DEEDS[item?.do]?.name ?? "Intervention",
    fields: own,
    shape: (item) => `${item?.do} ${item?.field ?? ""} ${paced(store.get().plan)} ${item?.over_ms === undefined}`,
    adds: [
      { label: "premature beat", make: () => ({ at_ms: now(), do: "stimulate", site: "right_atrium" }) },
      { label: "train", make: () => ({ at_ms: now(), do: "train", site: "right_atrium", cycle_ms: 600, count: 8 }) },
      { label: "change", make: () => ({ at_ms: now(), do: "set", field: "heart.sinus.rate_bpm", to: 120 }) },
      { label: "loss of capture", when: paced, make: () => ({ at_ms: now(), do: "lose_capture", channel: "V", for_ms: 2000 }) },
      { label: "undersensing", when: paced, make: () => ({ at_ms: now(), do: "undersense", channel: "V", for_ms: 2000 }) },
      { label: "broken lead", when: paced, make: () => ({ at_ms: now(), do: "fracture", channel: "V", for_ms: 2000 }) },
      { label: "dislodged lead", when: paced, make: () => ({ at_ms: now(), do: "dislodge", channel: "A", site: "rv_outflow" }) },
      { label: "signals from outside", when: paced, make: () => ({ at_ms: now(), do: "signal", channel: "V", cycle_ms: 100, count: 10 }) },
    ],
  });
}

/** Whether a plan has a device, for which alone some interventions mean anything. @param {any} plan */
const paced = (plan) => Boolean(plan.pacemaker);

/** @param {string} path */
function place(path) {
  const parts = path.split(".");
  /** @type {Record<string, string>} */
  const short = { right_bundle: "right bundle ", left_bundle: "left bundle ", left_anterior: "anterior fascicle ", left_posterior: "posterior fascicle ", left_septal: "septal fascicle ", exit: "sinus exit ", lower: "junction ", slow: "slow pathway " };
  return short[parts[parts.length - 2]] ?? "";
}
