// The left-hand side: every value of the plan, in groups that fold, with a search
// and a filter for what differs from the default. Built from the engine's
// catalogue; a field that the engine learns appears here by itself.

import { el, fill, say } from "../base/dom.js";
import { count } from "../base/format.js";
import { interventionsView, fociView } from "./lists.js";
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
  ["pacemaker", "Pacemaker", "Pacemaker"],
  ["", "Strip", ""],
];

/**
 * @typedef {object} Section
 * @property {HTMLElement} node
 * @property {Row[]} rows
 * @property {Row[]} folded
 * @property {HTMLDetailsElement} more
 * @property {string} title
 */

/**
 * @param {HTMLElement} root
 * @param {Store} store
 * @param {Catalogue} catalogue
 */
export function settingsView(root, store, catalogue) {
  const search = el("input", { type: "search", id: "search", placeholder: "Search settings", "aria-label": "Search settings", oninput: sift });
  const only = el("input", { type: "checkbox", id: "changed-only", onchange: sift });
  const onlyCount = el("span", null, "changed only");
  const loose = el("ul", { class: "loose", role: "alert" });
  const body = el("div", { class: "settings-body" });
  const foot = el("p", { class: "settings-help" });
  root.append(
    el("div", { class: "part" }, el("h2", null, "Settings"),
      el("label", { class: "only" }, only, onlyCount),
      el("button", { type: "button", class: "drawer-close", onclick: () => store.set({ drawer: "" }) }, "Close")),
    search, loose, body, foot);

  /** @type {Map<string, HTMLDetailsElement>} */
  const groups = new Map();
  /** @type {Section[]} */
  const sections = [];
  for (const field of catalogue.fields) {
    if (field.path.includes("[]")) continue;
    const [, group, title] = PLACES.find(([at]) => at === "" || field.path === at || field.path.startsWith(`${at}.`)) ?? PLACES[PLACES.length - 1];
    const section = sections.find((s) => s.title === title && groups.get(group)?.contains(s.node)) ?? open(group, title);
    const row = makeRow(store, field);
    (field.advanced ? section.folded : section.rows).push(row);
    if (field.advanced) section.more.append(row.node);
    else section.node.insertBefore(row.node, section.more);
  }
  for (const s of sections) s.more.hidden = s.folded.length === 0;
  const foci = fociView(store, catalogue);
  groups.get("Heart")?.append(foci.node);
  const interventions = interventionsView(store, catalogue);
  const last = fold("Interventions");
  last.append(interventions.node);
  for (const name of ["Heart", "Pacemaker", "Interventions", "Strip"]) {
    const g = groups.get(name);
    if (g) body.append(g);
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

  /** @param {string} group @param {string} title @returns {Section} */
  function open(group, title) {
    const more = el("details", { class: "more" }, el("summary", null, "more"));
    const node = el("section", null, title && el("h4", null, title), more);
    fold(group).append(node);
    const s = { node, rows: [], folded: [], more, title };
    sections.push(s);
    return s;
  }

  /** Shows the rows that the search and the filter let through. */
  function sift() {
    const wanted = search.value.trim().toLowerCase();
    const state = store.get();
    const filtered = wanted !== "" || only.checked;
    let found = 0;
    for (const s of sections) {
      let any = 0;
      let anyFolded = 0;
      for (const row of [...s.rows, ...s.folded]) {
        const words = `${s.title} ${row.field.label} ${row.field.path} ${row.field.help ?? ""}`.toLowerCase();
        const wrong = row.node.classList.contains("wrong");
        const shown = (wanted === "" || words.includes(wanted)) && (!only.checked || row.changed(state) || wrong);
        row.node.hidden = !shown;
        if (shown) {
          any++;
          if (row.field.advanced) anyFolded++;
        }
      }
      found += any;
      s.node.hidden = any === 0;
      s.more.hidden = anyFolded === 0;
      if (filtered && anyFolded > 0) s.more.open = true;
    }
    if (!filtered) for (const s of sections) s.more.open = s.folded.some((r) => r.changed(state) || r.node.classList.contains("wrong"));
    foci.node.hidden = wanted !== "" && !"foci focus rate site escape".includes(wanted) || only.checked && foci.count() === 0;
    last.hidden = wanted !== "" && !"interventions premature beat train change stimulate set".includes(wanted) || only.checked && interventions.count() === 0;
    for (const [name, g] of groups) {
      if (name !== "Interventions") g.hidden = filtered && ![...g.children].some((c) => c.tagName === "SECTION" && !(/** @type {HTMLElement} */ (c).hidden));
    }
    if (filtered) for (const g of groups.values()) g.open = true;
    if (wanted !== "") say(foot, found === 0 ? `Nothing is called “${search.value.trim()}”.` : count(found, "setting"));
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
      interventions.update(state);
      const rows = sections.flatMap((s) => [...s.rows, ...s.folded]);
      for (const row of rows) row.update(state);
      hideInsideAbsent(rows, state);
      const differ = rows.filter((r) => r.changed(state)).length;
      say(onlyCount, differ === 0 ? "changed only" : `changed only (${differ})`);
      const known = new Set([...root.querySelectorAll(".row.wrong")].map((n) => n.getAttribute("data-path")));
      const elsewhere = state.diagnoses.filter((d) => ![...known].some((p) => p !== null && (d.path === p || d.path.startsWith(`${p}[`))));
      fill(loose, elsewhere.map((d) => el("li", null, d.text)));
      if (first || changed.has("preset") || only.checked) sift();
      else for (const s of sections) if (s.folded.some((r) => r.node.classList.contains("wrong"))) s.more.open = true;
      first = false;
    },
    focusSearch() {
      search.focus();
      search.select();
    },
    destroy() {
      fill(root);
    },
  };
}

/**
 * A part that is absent has no values to set: its rows are not offered.
 * @param {Row[]} rows
 * @param {State} state
 */
function hideInsideAbsent(rows, state) {
  const absent = rows.filter((r) => r.field.kind === "group" && /** @type {HTMLInputElement | null} */ (r.node.querySelector(".off input"))?.checked);
  for (const row of rows) {
    row.node.classList.toggle("absent", absent.some((a) => row.path.startsWith(`${a.path}.`)));
  }
  void state;
}
