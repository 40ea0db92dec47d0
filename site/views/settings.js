// The left-hand side: every value of the plan, in groups that fold, with a search
// and a filter for what differs from the default. Built from the engine's
// catalogue; a field that the engine learns appears here by itself.

import { el, fill, say } from "../base/dom.js";
import { count } from "../base/format.js";
import { DEVICE_PLACES, deviceChoices, idle, modeLists } from "./device.js";
import { interventionsView, fociView, pathwaysView } from "./lists.js";
import { describe, makeRow } from "./row.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 * @typedef {import("../engine/wire.js").Field} Field
 * @typedef {import("./row.js").Row} Row
 */

/** Headings by the place of a field: the first prefix that fits. @type {[string, string, string][]} */
const PLACES = [
  ...DEVICE_PLACES,
  ["heart.sinus", "Heart", "Sinus node"],
  ["heart.atria", "Heart", "Atria"],
  ["heart.av_node.slow", "Heart", "AV node, slow pathway"],
  ["heart.av_node", "Heart", "AV node"],
  ["heart.his_purkinje.right_bundle", "Heart", "Right bundle branch"],
  ["heart.his_purkinje.left_bundle", "Heart", "Left bundle branch"],
  ["heart.his_purkinje.left_anterior", "Heart", "Left anterior fascicle"],
  ["heart.his_purkinje.left_posterior", "Heart", "Left posterior fascicle"],
  ["heart.his_purkinje.left_septal", "Heart", "Left septal fascicle"],
  ["heart.his_purkinje", "Heart", "His bundle"],
  ["heart.ventricles", "Heart", "Ventricles"],
  ["heart.pathways", "Heart", "Accessory pathways"],
  ["heart", "Heart", "More"],
  ["", "Strip", ""],
];

const GROUPS = ["Heart", "Pacemaker", "Interventions", "Strip"];

/**
 * @typedef {object} Section
 * @property {HTMLElement} node
 * @property {Row[]} rows
 * @property {HTMLButtonElement} more shows the rows that few people need
 * @property {boolean} open
 * @property {string} title
 * @property {boolean} whole all of it folds away
 */

/**
 * @param {HTMLElement} root
 * @param {Store} store
 * @param {Catalogue} catalogue
 * @param {HTMLElement} table saving and reading the device's settings
 */
export function settingsView(root, store, catalogue, table) {
  const search = el("input", { type: "search", id: "search", placeholder: "Search settings", "aria-label": "Search settings", oninput: sift });
  const only = el("input", { type: "checkbox", id: "changed-only", onchange: sift });
  const onlyCount = el("span", null, "changed only");
  const loose = el("ul", { class: "loose", role: "alert" });
  const body = el("div", { class: "settings-body" });
  const foot = el("p", { class: "settings-help" }, "Point at a name to read what it means and what is normal.");
  root.append(
    el("div", { class: "part" }, el("h2", null, "Settings"),
      el("label", { class: "only" }, only, onlyCount),
      el("button", { type: "button", class: "drawer-close", onclick: () => store.set({ drawer: "" }) }, "Close")),
    search, el("nav", { class: "jumps", "aria-label": "Groups of settings" }, GROUPS.map((name) => el("button", { type: "button", onclick: () => jump(name) }, name))),
    loose, body, foot);

  /** @type {Map<string, HTMLDetailsElement>} */
  const groups = new Map();
  /** @type {Section[]} */
  const sections = [];
  const parts = catalogue.fields.filter((f) => f.kind === "group" && f.is_null).map((f) => f.path);
  const naming = deviceChoices(catalogue);
  body.append(...modeLists(catalogue));
  for (const listed of catalogue.fields) {
    if (listed.path.includes("[]")) continue;
    const field = naming(listed);
    const [place, group, title] = PLACES.find(([at]) => at === "" || field.path === at || field.path.startsWith(`${at}.`)) ?? PLACES[PLACES.length - 1];
    const section = sections.find((s) => s.title === title && groups.get(group)?.contains(s.node)) ?? open(group, title, place.startsWith("pacemaker."));
    // Whether a part is there at all is never folded away.
    const within = parts.find((p) => p === "pacemaker" && field.path.startsWith(`${p}.`));
    const row = makeRow(store, field.path === place && field.kind === "group" ? { ...field, advanced: false } : field, { within, idle: (state) => within !== undefined && idle(field.path, modeOf(state)) });
    section.rows.push(row);
    section.node.insertBefore(row.node, section.whole ? null : section.more);
  }
  groups.get("Pacemaker")?.append(table);
  const foci = fociView(store, catalogue);
  const pathways = pathwaysView(store, catalogue);
  groups.get("Heart")?.append(foci.node, pathways.node);
  const interventions = interventionsView(store, catalogue);
  const last = fold("Interventions");
  last.append(interventions.node);
  for (const name of GROUPS) {
    const g = groups.get(name);
    if (g) body.append(g);
  }

  const standard = catalogue.fields.find((f) => f.path === "pacemaker.mode")?.word ?? "";
  /** @param {State} state */
  function modeOf(state) {
    return String(state.plan.pacemaker?.mode ?? standard);
  }

  /** Unfolds a group and brings it to the top. @param {string} name */
  function jump(name) {
    const g = groups.get(name);
    if (!g || g.hidden) return;
    g.open = true;
    body.scrollTop += g.getBoundingClientRect().top - body.getBoundingClientRect().top;
  }

  /** @param {string} name */
  function fold(name) {
    let g = groups.get(name);
    if (!g) {
      g = el("details", { class: "settings-group", open: true }, el("summary", null, el("h3", null, name)));
      groups.set(name, g);
    }
    return g;
  }

  /** @param {string} group @param {string} title @param {boolean} whole @returns {Section} */
  function open(group, title, whole) {
    const more = el("button", {
      type: "button", class: "more", "aria-expanded": "false",
      onclick: () => {
        s.open = !s.open;
        sift();
      },
    }, "more");
    const node = el("section", null, title && group !== title && !whole && el("h4", null, title), more);
    if (whole) node.prepend(more); // its heading is what unfolds it
    fold(group).append(node);
    /** @type {Section} */
    const s = { node, rows: [], more, title, open: false, whole };
    sections.push(s);
    return s;
  }

  /**
   * Shows the rows that the search, the filter and the folds let through. A row
   * that is changed or wrong is never folded away.
   */
  function sift() {
    const wanted = search.value.trim().toLowerCase();
    const state = store.get();
    const filtered = wanted !== "" || only.checked;
    const absent = sections.flatMap((s) => s.rows).filter((r) => r.absent(state)).map((r) => `${r.path}.`);
    let found = 0;
    for (const s of sections) {
      let any = 0;
      let away = 0;
      for (const row of s.rows) {
        const words = `${s.title} ${row.field.label} ${row.field.path} ${row.field.help ?? ""}`.toLowerCase();
        const telling = row.changed(state) || row.wrong();
        const fits = (wanted === "" || words.includes(wanted)) && (!only.checked || telling) && !absent.some((a) => row.path.startsWith(a));
        const folded = row.field.advanced === true && !telling && !s.open && !filtered;
        row.node.hidden = !fits || folded;
        if (fits) any++;
        if (fits && row.field.advanced && !telling) away++;
      }
      found += any;
      s.node.hidden = any === 0;
      s.more.hidden = away === 0 && !(s.whole && any > 0);
      s.more.disabled = filtered;
      say(s.more, s.whole ? s.title : s.open ? "less" : "more");
      s.more.setAttribute("aria-expanded", String(s.open || filtered));
    }
    foci.node.hidden = (wanted !== "" && !"foci focus rate site escape".includes(wanted)) || (only.checked && foci.count() === 0);
    pathways.node.hidden = (wanted !== "" && !"accessory pathways bypass tract pre-excitation re-entry concealed".includes(wanted)) || (only.checked && pathways.count() === 0);
    last.hidden = (wanted !== "" && !"interventions premature beat train change stimulate set loss of capture undersensing broken dislodged lead signals from outside noise".includes(wanted)) || (only.checked && interventions.count() === 0);
    for (const [name, g] of groups) {
      if (name !== "Interventions") g.hidden = filtered && !g.querySelector(":scope > section:not([hidden])");
      if (filtered) g.open = true;
    }
    if (wanted !== "") say(foot, found === 0 ? `No setting is called “${search.value.trim()}”.` : count(found, "setting"));
  }

  /** Says what the row under the pointer or the focus means. @param {Event} e */
  function explain(e) {
    const node = e.target instanceof Element ? e.target.closest(".row") : null;
    const path = node?.getAttribute("data-path");
    if (!path) return;
    const field = catalogue.fields.find((f) => f.path === path.replace(/\[\d+\]/g, "[]"));
    if (field) fill(foot, el("strong", null, field.label), " ", describe(field));
  }
  body.addEventListener("focusin", explain);
  body.addEventListener("pointerover", explain);

  let first = true;
  return {
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (!["plan", "diagnoses", "catalogue"].some((k) => changed.has(k)) && !first) return;
      foci.update(state);
      pathways.update(state);
      interventions.update(state);
      const rows = sections.flatMap((s) => s.rows);
      for (const row of rows) row.update(state);
      const differ = rows.filter((r) => r.changed(state)).length;
      say(onlyCount, differ === 0 ? "changed only" : `changed only (${differ})`);
      const known = new Set([...root.querySelectorAll(".row.wrong")].map((n) => n.getAttribute("data-path")));
      const elsewhere = state.diagnoses.filter((d) => ![...known].some((p) => p !== null && (d.path === p || d.path.startsWith(`${p}[`))));
      fill(loose, elsewhere.map((d) => el("li", null, d.text)));
      sift();
      first = false;
    },
    focusSearch() {
      search.focus();
      search.select();
    },
    /** Brings the row of a value to the eye and the hand. @param {string} path */
    focusSetting(path) {
      store.set({ drawer: "settings" });
      search.value = "";
      only.checked = false;
      for (const s of sections) s.open ||= s.rows.some((r) => r.path === path);
      sift();
      const row = root.querySelector(`.row[data-path="${CSS.escape(path)}"]`) ?? root.querySelector(`.row[data-path="${CSS.escape(path.replace(/\[\d+\]$/, ""))}"]`);
      for (let d = row?.closest("details"); d; d = d.parentElement?.closest("details") ?? null) d.open = true;
      row?.scrollIntoView({ block: "center" });
      /** @type {HTMLElement | null} */ (row?.querySelector("input, select"))?.focus();
    },
    focusWrong() {
      /** @type {HTMLElement | null} */ (root.querySelector(".row.wrong input, .row.wrong select"))?.focus();
    },
    destroy() {
      fill(root);
    },
  };
}
