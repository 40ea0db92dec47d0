// The map: a sweep of one or two values of the plan, beside Timeline and Listing.

import { el, fill, say } from "../base/dom.js";
import { count, num } from "../base/format.js";
import { nextFrame, whenQuiet } from "../base/frame.js";
import { startPool, usualSize } from "../engine/pool.js";
import { sweeper } from "../engine/sweeper.js";
import { put } from "../model/path.js";
import { mapKey, planAt } from "../model/sweep.js";
import { sortsOf } from "./mapchart.js";
import { mapForm } from "./mapform.js";
import { mapPlot } from "./mapplot.js";
import { boundaryTables, mapLegend, pointTable, rowsTable, tableTools } from "./mapread.js";
import { pointText } from "./mapwords.js";
import { openPreset } from "./presets.js";
import { searchView } from "./search.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 */

const EVERY_MS = 150; // between paintings while it runs

/**
 * @param {HTMLElement} root
 * @param {Store} store
 * @param {Catalogue} catalogue
 * @param {URL} worker
 */
export function mapView(root, store, catalogue, worker) {
  const pool = startPool(worker, usualSize());
  const sweep = sweeper(pool, soon);
  let outcome = "";
  let point = 0;
  let kept = -1;
  let refined = "";

  const form = mapForm(store, catalogue, {
    pool, run: start,
    shown: () => outcome || (store.get().plan.sweep?.outcomes?.[0] ?? "pattern"),
    show(name) {
      outcome = name;
      nextFrame(refresh);
      form.update(store.get());
    },
  });
  const plot = mapPlot({ move, open, key });
  const table = pointTable();
  const live = el("p", { class: "unseen", role: "status", "aria-live": "polite", id: "map-live" });
  const progress = el("progress", { max: 1, value: 0, "aria-label": "Points computed" });
  const says = el("p", { class: "map-says", role: "status" });
  const cancel = el("button", { type: "button", id: "map-cancel", onclick: sweep.cancel }, "Cancel");
  const goOn = el("button", { type: "button", id: "map-resume", onclick: sweep.resume }, "Go on");
  const stale = el("p", { class: "map-stale", role: "status", hidden: true }, "Computed for an earlier plan: run again. ",
    el("button", { type: "button", onclick: start }, "Run again"));
  const legend = mapLegend();
  const note = el("p", { class: "aside" });
  const bounds = el("div", { class: "map-changes" });
  const rows = el("div", null);
  const rowsFold = el("details", { class: "fold", ontoggle: () => nextFrame(refresh) }, el("summary", null, el("h3", null, "The map as text")), rows);
  const keepButton = el("button", { type: "button", id: "map-keep", onclick: keep }, "Keep this point");
  const compare = el("button", { type: "button", id: "map-compare", onclick: compareStrips }, "Compare the strips");
  const openButton = el("button", { type: "button", class: "main", id: "map-open", onclick: () => open(point) }, "Open the strip");
  const result = el("div", { class: "map-result", hidden: true },
    stale,
    el("div", { class: "map-sheet" }, plot.node, legend.node, note),
    el("div", { class: "map-side" },
      table.node,
      el("div", { class: "map-acts" }, openButton, keepButton, compare),
      bounds, tableTools(() => sweep.run()?.grid ?? null), rowsFold));
  const empty = el("div", { class: "map-empty" },
    el("h3", null, "A map runs the plan at every value of one or two of its numbers"),
    el("p", null, "Choose a value under Across, and perhaps one under Upwards, then Run. Or begin with one of these:"),
    el("ul", null, catalogue.presets.filter((p) => p.plan.sweep).map((p) => el("li", null,
      el("button", { type: "button", class: "link", "data-map": p.name, onclick: () => openPreset(store, p) }, p.title.replace(/^Map: /, "")),
      el("span", { class: "aside" }, ` ${p.note.split(". ")[0]}.`)))));
  const search = searchView(store, catalogue, worker, () => turn("map"));
  const body = el("div", { class: "map-body" }, form.node, el("div", { class: "map-progress" }, progress, cancel, goOn, says), empty, result, live);
  const modes = /** @type {const} */ (["map", "search"]).map((m) => el("button", { type: "button", id: `map-mode-${m}`, "aria-pressed": String(m === "map"), onclick: () => turn(m) }, m === "map" ? "Map of values" : "Settings search"));
  const pane = el("section", { class: "map", id: "map", role: "tabpanel", "aria-label": "Map", hidden: true },
    el("div", { class: "map-modes", role: "group", "aria-label": "Map or settings search" }, modes), body, search.node);
  root.append(pane);
  const seen = new ResizeObserver(() => nextFrame(refresh));
  seen.observe(pane);

  let painted = 0;
  /** Paints what has come in, but leaves the machine to the map while it runs. */
  function soon() {
    const wait = sweep.run()?.state === "running" ? painted + EVERY_MS - performance.now() : 0;
    if (wait > 0) later();
    else nextFrame(refresh);
  }
  let waiting = 0;
  function later() {
    if (waiting === 0) waiting = window.setTimeout(() => {
      waiting = 0;
      nextFrame(refresh);
    }, EVERY_MS);
  }

  /** @param {"map" | "search"} to */
  function turn(to) {
    modes.forEach((b, i) => b.setAttribute("aria-pressed", String((i === 0) === (to === "map"))));
    body.hidden = to !== "map";
    search.node.hidden = to !== "search";
    if (to === "search") {
      search.warm();
      search.update(store.get());
    } else {
      form.update(store.get());
      nextFrame(refresh);
    }
  }

  function start() {
    const { plan, diagnoses } = store.get();
    if (!plan.sweep?.x || diagnoses.length > 0) return;
    kept = -1;
    refined = "";
    fill(bounds);
    pane.dataset.run = "running"; // the rest of the page follows with the next frame
    sweep.start(plan);
  }

  /** The outcome that is drawn: the chosen one, where this map has it. */
  function drawn() {
    const names = sweep.run()?.grid?.outcomes().map((o) => o.name) ?? [];
    return names.includes(outcome) ? outcome : (names[0] ?? "");
  }

  const lookUp = whenQuiet(180, async () => {
    const run = sweep.run();
    const name = drawn();
    if (!run?.grid || run.state !== "done") return;
    const about = run.grid.outcomes().find((o) => o.name === name);
    const { grid } = run;
    const at = [Math.floor(point / grid.nx), point % grid.nx];
    const asked = `${run.key} ${name} ${at}`;
    if (refined === asked) return;
    refined = asked;
    if (about?.kind !== "word") {
      fill(bounds);
      return;
    }
    const parts = [];
    for (const along of grid.head.y ? [0, 1] : [0]) {
      const found = await sweep.boundaries(name, along, at[along]);
      if (refined !== asked) return;
      if (found) parts.push({ along, at: at[along], ...found });
    }
    fill(bounds, parts.length > 0 && el("h3", null, "Where it changes"), boundaryTables(grid, name, parts));
  });

  /** @param {number} p @param {boolean} byKey */
  function move(p, byKey) {
    const grid = sweep.run()?.grid;
    if (!grid) return;
    point = p;
    plot.cursor(point, kept);
    table.show(grid, point, kept);
    compare.disabled = kept < 0 || kept === point;
    if (byKey) say(live, pointText(grid, point, drawn()));
    lookUp();
  }

  /** The plan of a point: what the map was computed for, with its values. @param {number} p */
  async function planOf(p) {
    const run = sweep.run();
    if (!run?.grid || run.grid.refused(p) !== undefined) return null;
    let plan = planAt(run.plan, run.grid.values(p));
    if (run.plan.sweep.seeds !== undefined) plan = put(plan, "seed", run.grid.head.seeds[0]);
    if ([run.plan.sweep.x, run.plan.sweep.y].some((a) => a?.premature !== undefined)) {
      const whole = await sweep.planOf(p);
      if (!whole) return null;
      plan = { ...plan, interventions: whole.interventions };
    }
    return plan;
  }

  /** @param {number} p */
  async function open(p) {
    move(p, false);
    const plan = await planOf(p);
    if (!plan) {
      const grid = sweep.run()?.grid;
      if (grid) say(live, pointText(grid, p, drawn()));
      return;
    }
    store.edit(plan, "", { selected: 0, lit: [], tab: "timeline", view: { ...store.get().view, t0_ms: 0 } });
    requestAnimationFrame(() => document.getElementById("timeline")?.focus());
  }

  function keep() {
    const grid = sweep.run()?.grid;
    if (!grid) return;
    kept = kept === point ? -1 : point;
    move(point, false);
    say(live, kept < 0 ? "The kept point is let go." : "This point is kept. Go to another and press D to compare the strips.");
  }

  async function compareStrips() {
    if (kept < 0 || kept === point) return;
    const [first, second] = [await planOf(kept), await planOf(point)];
    if (!first || !second) return;
    const { preset, view } = store.get();
    store.change({
      plan: second, before: { plan: first, preset, title: String(first.title ?? "") }, panel: "contrast",
      selected: 0, lit: [], tab: "timeline", view: { ...view, t0_ms: 0 },
    }, "");
  }

  /** @param {string} k */
  function key(k) {
    if (k === "a") keep();
    else if (k === "d") compareStrips();
    else if (k === "r") start();
    else if (k === "escape" && sweep.run()?.state === "running") sweep.cancel();
    else return false;
    return true;
  }

  function refresh() {
    const run = sweep.run();
    const state = store.get();
    if (state.tab !== "map" || body.hidden) return;
    const running = run?.state === "running";
    pane.dataset.run = run?.state ?? "none";
    pane.dataset.firstMs = String(Math.round(run?.first_ms ?? 0));
    empty.hidden = run !== null || Boolean(state.plan.sweep?.x);
    cancel.hidden = !running;
    goOn.hidden = run?.state !== "cancelled" && run?.state !== "failed";
    progress.hidden = !running;
    pane.querySelector(".map-progress")?.classList.toggle("failed", run?.state === "failed" || run?.state === "refused");
    say(says, run ? status(run) : state.plan.sweep?.x ? "Not run yet." : "");
    result.hidden = !run?.grid || run.grid.done() === 0;
    if (!run?.grid || result.hidden) return;
    painted = performance.now();
    const { grid } = run;
    progress.value = grid.done() / grid.of;
    const old = run.key !== mapKey(state.plan);
    stale.hidden = !old;
    result.classList.toggle("stale", old);
    const name = drawn();
    const sorts = sortsOf(grid, name);
    plot.paint(run, sorts, name);
    if (point >= grid.of) point = 0;
    plot.cursor(point, kept);
    table.show(grid, point, kept);
    keepButton.textContent = kept === point ? "Let go of this point" : "Keep this point";
    compare.disabled = kept < 0 || kept === point;
    openButton.disabled = grid.refused(point) !== undefined;
    legend.show(grid.head.y ? [sorts] : grid.outcomes().filter((o) => o.kind !== "number").map((o) => sortsOf(grid, o.name)));
    say(note, run.bounds.get(name)?.some((b) => b.found.length > 0) ? "Thick lines: the exact places of change." : "");
    if (rowsFold.open) fill(rows, rowsTable(grid, sorts));
    if (run.state === "done") {
      const about = grid.outcomes().find((o) => o.name === name);
      if (about?.kind === "word") sweep.refine(name);
      lookUp();
    }
  }

  /** @param {import("../engine/sweeper.js").Run} run */
  function status(run) {
    const { grid } = run;
    const done = grid ? `${count(grid.done(), "point")} of ${grid.of}` : "Starting";
    if (run.state === "running") return done;
    if (run.state === "cancelled") return `Cancelled at ${done}. What is there stands.`;
    if (run.state === "failed") return `The engine failed at ${done}: ${run.why.split("\n")[0]} A fresh one is ready; Go on takes up where it stopped.`;
    if (run.state === "refused") return run.why;
    const runs = (grid?.of ?? 0) * (grid?.head.seeds.length ?? 1);
    return `${count(runs, "run")} in ${num(run.ms / 1000, 2)} s on ${count(run.workers, "core")}: ${num((1000 * runs) / run.ms, 0)} a second.`;
  }

  let entered = false;
  return {
    /** Computes the map of the plan as it stands. */
    start,
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (changed.has("tab")) {
        pane.hidden = state.tab !== "map";
        document.body.dataset.tab = state.tab;
        if (state.tab === "map") {
          if (!entered) pool.warm();
          entered = true;
        }
      }
      if (changed.has("preset") || !entered) {
        if (state.plan.goals && !state.plan.sweep && body.hidden === false) turn("search");
        else if (state.plan.sweep && !state.plan.goals && body.hidden) turn("map");
      }
      if (state.tab !== "map") return;
      if (["tab", "plan", "diagnoses", "dark"].some((k) => changed.has(k))) {
        form.update(state);
        nextFrame(refresh);
        if (!search.node.hidden) search.update(state);
      }
    },
    destroy() {
      seen.disconnect();
      pool.stop();
      search.stop();
      pane.remove();
    },
  };
}
