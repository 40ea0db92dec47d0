// The settings search: goals on one side, the settings that meet them on the other.

import { el, fill, say } from "../base/dom.js";
import { count, num } from "../base/format.js";
import { nextFrame } from "../base/frame.js";
import { startPool } from "../engine/pool.js";
import { MOST, searcher } from "../engine/searcher.js";
import { firstGoals, roomAround, tightest } from "../model/goals.js";
import { put } from "../model/path.js";
import { goalForm } from "./goalform.js";
import { valueText, withUnit } from "./mapwords.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/searcher.js").Answer} Answer
 * @typedef {import("../engine/searcher.js").Found} Found
 */

const SHOWN = 50; // rows of the table

/**
 * @param {Store} store
 * @param {import("../engine/wire.js").Catalogue} catalogue
 * @param {URL} worker
 * @param {() => void} toMap shows the map
 */
export function searchView(store, catalogue, worker, toMap) {
  const pool = startPool(worker, 1);
  const search = searcher(pool, () => nextFrame(refresh));
  const form = goalForm(store, catalogue);
  const run = el("button", { type: "button", class: "main", id: "search-run", onclick: start }, "Search");
  const cancel = el("button", { type: "button", id: "search-cancel", onclick: search.cancel }, "Cancel");
  const goOn = el("button", { type: "button", id: "search-resume", onclick: search.resume }, "Go on");
  const progress = el("progress", { max: 1, value: 0, "aria-label": "Combinations tried" });
  const says = el("p", { class: "map-says", role: "status" });
  const faults = el("ul", { class: "map-faults", role: "alert" });
  const stale = el("p", { class: "map-stale", role: "status", hidden: true }, "Searched for an earlier plan or earlier goals: search again.");
  const results = el("div", { class: "search-found" });
  const bar = el("div", { class: "map-progress" }, run, progress, cancel, goOn, says);
  const node = el("div", { class: "search", id: "goal-search", hidden: true }, form.node, el("div", { class: "search-side" }, bar, faults, stale, results));
  let chosen = 0;
  let told = /** @type {any} */ (null);

  function start() {
    const { plan, diagnoses } = store.get();
    if (diagnoses.length > 0) return;
    chosen = 0;
    if (!plan.goals) store.edit({ ...plan, goals: firstGoals(plan) }, "");
    search.start(store.get().plan);
  }

  /** The searched plan with the settings of a row. @param {Answer} a @param {Found} f */
  function planWith(a, f) {
    const base = store.get().plan;
    return a.settings.reduce((p, s, i) => (f.values[i] === "default" ? p : put(p, s.field, f.values[i])), base);
  }

  /** @param {Answer} a @param {Found} f */
  function use(a, f) {
    store.edit(planWith(a, f), "", { selected: 0, lit: [] });
  }

  /** @param {Answer} a @param {Found} f */
  function compare(a, f) {
    const { plan, preset, view } = store.get();
    store.change({ plan: planWith(a, f), before: { plan, preset, title: String(plan.title ?? "") }, panel: "contrast", selected: 0, lit: [], tab: "timeline", view: { ...view, t0_ms: 0 } }, "");
  }

  /** @param {Answer} a @param {Found} f @param {string} situation */
  async function open(a, f, situation) {
    const plan = situation === "" ? planWith(a, f) : await search.planOf(f.combination, situation);
    if (plan) store.edit(plan, "", { selected: 0, lit: [], tab: "timeline", view: { ...store.get().view, t0_ms: 0 } });
  }

  /** A map over the first two settings, around a row. @param {Answer} a @param {Found} f */
  function mapAround(a, f) {
    const plan = planWith(a, f);
    const [x, y] = plan.goals.settings;
    const outcomes = [...new Set([...(plan.goals.must ?? []), ...(plan.goals.prefer ?? [])].flatMap((g) => (g.outcome ? [g.outcome] : [])))];
    store.edit({ ...plan, sweep: { x, ...(y && { y }), ...(outcomes.length > 0 && { outcomes }) } }, "");
    toMap();
  }

  /** @param {Answer} a */
  function table(a) {
    const head = [...a.settings.map((s) => (s.unit ? `${s.label}, ${s.unit}` : s.label)), ...a.wishes, "nearest to failing"];
    return el("table", { class: "search-table" },
      el("caption", { class: "unseen" }, "Settings that hold every goal, best first"),
      el("thead", null, el("tr", null, el("th", { scope: "col" }, el("span", { class: "unseen" }, "choose")), head.map((h) => el("th", { scope: "col" }, h)))),
      el("tbody", null, a.found.slice(0, SHOWN).map((f, i) => {
        const near = tightest(f.margins);
        const m = near < 0 ? null : f.margins[near];
        return el("tr", { "data-combination": String(f.combination), class: i === chosen ? "chosen" : null },
          el("td", null, el("input", { type: "radio", name: "search-row", checked: i === chosen, "aria-label": `Row ${i + 1}: ${a.settings.map((s, k) => `${s.label} ${valueText(f.values[k])}${withUnit(s.unit)}`).join(", ")}`, onchange: () => {
            chosen = i;
            told = null;
            refresh();
            /** @type {HTMLElement | null} */ (results.querySelector("input:checked"))?.focus();
          } })),
          f.values.map((v) => el("td", { class: "n" }, valueText(v))),
          f.wishes.map((w) => el("td", { class: "n" }, w ? `${num(w.mean, 1)}${withUnit(w.unit)}` : "none")),
          el("td", null, m && m.margin !== null ? `${num(m.margin, 1)}${withUnit(a.goals[near].unit)}: ${a.goals[near].text}` : "no number"));
      })));
  }

  /** All of one row: margins, where each is nearest, how far the settings may go. @param {Answer} a @param {Found} f */
  function row(a, f) {
    const whole = a.found.length === a.found_count;
    const room = roomAround(a.settings, new Set(a.found.map((x) => x.combination)), f.combination);
    return el("div", { class: "search-row" },
      el("div", { class: "map-acts" },
        el("button", { type: "button", class: "main", id: "search-use", onclick: () => use(a, f) }, "Use"),
        el("button", { type: "button", id: "search-compare", onclick: () => compare(a, f) }, "Compare"),
        el("button", { type: "button", id: "search-map", onclick: () => mapAround(a, f) }, "Map around it"),
        el("select", { "aria-label": "Open the strip of a situation", onchange: (/** @type {any} */ e) => e.target.value !== "-" && open(a, f, e.target.value) },
          el("option", { value: "-" }, "Open the strip …"), a.situations.map((s) => el("option", { value: s.name }, s.name)))),
      el("h4", null, "Margins"),
      el("table", null,
        el("thead", null, el("tr", null, ["goal", "margin", "where it is nearest"].map((h) => el("th", { scope: "col" }, h)))),
        el("tbody", null, f.margins.map((m) => el("tr", null,
          el("th", { scope: "row" }, a.goals[m.goal].text),
          el("td", null, m.margin === null ? (m.word ? m.word.replaceAll("_", " ") : "no number") : `${num(m.margin, 1)}${withUnit(a.goals[m.goal].unit)}`),
          el("td", null, `${m.situation}${m.at ? `, ${m.at.replaceAll("_", " ")}` : ""}${m.value === null ? "" : ` (${num(m.value, 1)}${withUnit(a.goals[m.goal].unit)})`}${m.otherwise ? "; the closed form says otherwise" : ""}`))))),
      el("h4", null, "How far each setting may go, the others as they are"),
      el("ul", null, a.settings.map((s, i) => el("li", null, `${s.label} ${valueText(f.values[i])}${withUnit(s.unit)}: `,
        room[i].steps === 1 ? "no other neighbouring value holds every goal" : `every goal holds from ${valueText(room[i].low)} to ${valueText(room[i].high)}${withUnit(s.unit)}`, s.now === null ? "" : `; now ${valueText(s.now)}`))),
      !whole && el("p", { class: "aside" }, `Among the best ${MOST} only.`));
  }

  /** @param {Answer} a */
  function conflicts(a) {
    return el("div", { class: "search-conflicts" }, a.conflicts.map((c) => el("section", null,
      el("h4", null, c.text),
      c.reach.length > 0 && el("table", null,
        el("thead", null, el("tr", null, ["goal", "comes to, the others held", "with"].map((h) => el("th", { scope: "col" }, h)))),
        el("tbody", null, c.reach.map((r) => el("tr", null,
          el("th", { scope: "row" }, a.goals[r.goal].text),
          el("td", null, r.value === null ? (r.word ?? "no number") : `${num(r.value, 1)}${withUnit(a.goals[r.goal].unit)}${r.margin === null ? "" : `, ${num(Math.abs(r.margin), 1)} short`}`),
          el("td", null, r.values.map((v, i) => `${a.settings[i].label} ${valueText(v)}${withUnit(a.settings[i].unit)}`).join(", ")))))))));
  }

  function refresh() {
    const h = search.hunt();
    const state = store.get();
    if (node.hidden) return;
    node.dataset.run = h?.state ?? "none";
    const running = h?.state === "running";
    progress.hidden = cancel.hidden = !running;
    goOn.hidden = h?.state !== "cancelled" && h?.state !== "failed";
    run.disabled = state.diagnoses.length > 0;
    fill(faults, state.diagnoses.map((d) => el("li", null, d.text)));
    bar.classList.toggle("failed", h?.state === "failed" || h?.state === "refused");
    stale.hidden = !h || same(h.plan, state.plan);
    node.classList.toggle("old", !stale.hidden);
    if (!h) return say(says, state.plan.goals ? "Not searched yet." : "These goals are a beginning; change them, then Search.");
    progress.value = h.of > 0 ? h.done / h.of : 0;
    const phase = h.phase === 2 ? "Looking for what conflicts: " : "";
    say(says, running ? `${phase}${h.done} of ${count(h.of, "combination")}${h.answer ? `, ${h.answer.found_count} hold every goal` : ""}`
      : h.state === "cancelled" ? `Cancelled at ${h.done} of ${count(h.of, "combination")}. What is there stands.`
        : h.state === "failed" ? `The engine failed: ${h.why.split("\n")[0]} Go on begins again with a fresh one.`
          : h.state === "refused" ? h.why : `${h.answer ? count(h.answer.work.runs, "run") : ""} in ${num(h.ms / 1000, 2)} s.`);
    const key = h.answer;
    if (key === told) return;
    told = key;
    const a = h.answer;
    if (!a) return fill(results);
    fill(results,
      el("p", { class: "search-text" }, h.state === "done" && a.found_count === 0 ? a.text.split(". ")[0].replace(/\.?$/, ".") : a.text),
      a.work.excluded.length > 0 && el("ul", { class: "aside" }, a.work.excluded.map((t) => el("li", null, t))),
      a.found.length > 0 && [table(a), a.found_count > SHOWN && el("p", { class: "aside" }, `The best ${SHOWN} of ${a.found_count}.`), h.state === "done" && a.found[chosen] && row(a, a.found[chosen])],
      a.conflicts.length > 0 && conflicts(a));
  }

  return {
    node,
    refresh,
    start,
    /** @param {State} state */
    update(state) {
      form.update(state);
      nextFrame(refresh);
    },
    warm: pool.warm,
    stop: pool.stop,
  };
}

/** Whether two plans have the same search: their words, and what the map varies, are no part of it. @param {any} a @param {any} b */
function same(a, b) {
  if (a === b) return true;
  const plain = (/** @type {any} */ { title: _, note: __, sweep: ___, ...p }) => {
    let out = p;
    for (const s of p.goals?.settings ?? []) if (s.field) out = put(out, s.field, null); // each combination has its own
    return JSON.stringify(out);
  };
  return plain(a) === plain(b);
}
