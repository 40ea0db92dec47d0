// What a map varies and shows: two axes, an outcome, and the button that runs it.

import { el, fill, say, uid } from "../base/dom.js";
import { count } from "../base/format.js";
import { drop, get, put } from "../model/path.js";
import { pathOf, valueCount } from "../model/sweep.js";
import { axisForm } from "./axisform.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 */

/** What a new map shows. */
const USUAL = ["pattern", "v_rate_bpm", "longest_pause_ms", "av_max_ms"];
const WITH_DEVICE = ["endless_loop", "ventricular_paced_percent"];

/**
 * @param {Store} store
 * @param {Catalogue} catalogue
 * @param {{run: () => void, shown: () => string, show: (outcome: string) => void, pool: import("../engine/pool.js").Pool}} map
 */
export function mapForm(store, catalogue, map) {
  /** @param {any} plan @param {string} stroke */
  const edit = (plan, stroke) => store.edit(plan, stroke);

  /** @param {"x" | "y"} at */
  const write = (at) => (/** @type {any} */ axis, /** @type {string} */ stroke) => {
    const { plan } = store.get();
    const sweep = plan.sweep ?? { outcomes: [...USUAL, ...(get(plan, "pacemaker") ? WITH_DEVICE : [])] };
    edit({ ...plan, sweep: ordered({ ...sweep, [at]: axis }) }, stroke && `sweep ${at} ${stroke}`);
  };
  const x = axisForm({ name: "Across", store, catalogue, write: write("x"), allow: free("y") });
  const y = axisForm({
    name: "Upwards", store, catalogue, write: write("y"), allow: free("x"),
    remove: () => edit(drop(store.get().plan, "sweep.y"), ""),
  });

  /** What the other axis does not vary. @param {"x" | "y"} other @returns {(v: import("../model/sweep.js").Variable) => boolean} */
  function free(other) {
    return (v) => {
      const axis = store.get().plan.sweep?.[other];
      return pathOf(axis) !== v.path && !(axis?.premature !== undefined && v.path.startsWith("coupling at "));
    };
  }

  const showId = uid("show");
  const show = el("select", {
    id: showId,
    onchange: () => {
      const { plan } = store.get();
      const asked = plan.sweep?.outcomes;
      if (asked && !asked.includes(show.value)) edit(put(plan, "sweep.outcomes", [...asked, show.value]), "");
      map.show(show.value);
    },
  });
  const help = el("p", { class: "axis-where" });
  const seedsId = uid("seeds");
  const seeds = el("input", {
    type: "text", id: seedsId, class: "value", inputMode: "numeric", autocomplete: "off", placeholder: "1",
    oninput: () => {
      const { plan } = store.get();
      if (!plan.sweep) return;
      const n = Number(seeds.value);
      edit(seeds.value.trim() === "" || n === 1 ? drop(plan, "sweep.seeds") : put(plan, "sweep.seeds", Number.isFinite(n) ? n : seeds.value), "sweep seeds");
    },
    onblur: () => store.settle(),
  });
  const most = navigator.hardwareConcurrency || 2;
  const workersId = uid("workers");
  const workers = el("select", { id: workersId, onchange: () => map.pool.resize(Number(workers.value)) },
    Array.from({ length: most }, (_, i) => el("option", { value: String(i + 1), selected: i + 1 === map.pool.size() }, String(i + 1))));
  const faults = el("ul", { class: "map-faults", role: "alert" });
  const size = el("span", { class: "map-size" });
  const run = el("button", { type: "button", class: "main", id: "map-run", onclick: map.run }, "Run");
  const node = el("div", { class: "map-form" },
    el("div", { class: "map-axes" }, x.node, y.node),
    el("div", { class: "map-show" },
      el("label", { for: showId }, "Show"), show,
      el("label", { for: seedsId, title: "A plan with chance in it is run this often at every point, each with another seed" }, "Runs a point"), seeds,
      el("label", { for: workersId, title: "How many of this machine's cores compute the map" }, "Cores"), workers,
      run, size),
    help, faults);

  /** Outcomes by whether they are asked for. @type {string} */
  let listed = "";
  /** @param {State} state */
  function list(state) {
    const asked = state.plan.sweep?.outcomes ?? (state.plan.sweep ? catalogue.outcomes.filter((o) => !o.slow).map((o) => o.name) : USUAL);
    const key = JSON.stringify(asked);
    if (key === listed) return;
    listed = key;
    const option = (/** @type {import("../engine/wire.js").Outcome} */ o) => el("option", { value: o.name }, o.unit ? `${o.label}, ${o.unit}` : o.label);
    const rest = catalogue.outcomes.filter((o) => !asked.includes(o.name));
    fill(show, el("optgroup", { label: "Computed with the map" }, catalogue.outcomes.filter((o) => asked.includes(o.name)).map(option)),
      rest.length > 0 && el("optgroup", { label: "Needs another run" }, rest.map(option)));
  }

  return {
    node,
    /** @param {State} state */
    update(state) {
      const { sweep } = state.plan;
      x.update(sweep?.x);
      y.update(sweep?.y);
      y.node.hidden = !sweep?.x;
      y.removable(Boolean(sweep?.y));
      list(state);
      show.value = map.shown();
      const about = catalogue.outcomes.find((o) => o.name === show.value);
      say(help, about ? `${about.help}${about.source ? ` Source: ${about.source}.` : ""}` : "");
      if (document.activeElement !== seeds) seeds.value = sweep?.seeds === undefined ? "" : String(Array.isArray(sweep.seeds) ? sweep.seeds.length : sweep.seeds);
      const wrong = state.diagnoses;
      fill(faults, wrong.map((d) => el("li", null, d.text)));
      const n = valueCount(sweep?.x) * valueCount(sweep?.y) * Math.max(1, Array.isArray(sweep?.seeds) ? sweep.seeds.length : (sweep?.seeds ?? 1));
      say(size, sweep?.x && n > 0 ? count(n, "run") : "");
      run.disabled = !sweep?.x || wrong.length > 0;
    },
  };
}

/** Keys in the order of a plan file. @param {any} s */
function ordered({ x, y, seeds, outcomes }) {
  return { ...(x && { x }), ...(y && { y }), ...(seeds !== undefined && { seeds }), ...(outcomes && { outcomes }) };
}
