// The modules that know no document.

import assert from "node:assert/strict";
import { test } from "node:test";
import { num, typed } from "../base/format.js";
import { timeScale, tOf, xOf } from "../base/scale.js";
import { nearest, placeOf, readScene, timeAt } from "../engine/scene.js";
import { flipLog } from "../model/flips.js";
import * as handles from "../model/handle.js";
import { covers, drop, dropWithin, get, put, steps } from "../model/path.js";
import { createStore } from "../model/store.js";
import { choices, FIRST_VIEW, fitSpeed, ladderFor, onStrip, pan, reveal, shown, withChoices, zoomTo } from "../model/view.js";
import { headingOf, idle, modeWords } from "../views/device.js";
import { fraction, valueAt, verdict } from "../views/range.js";

test("a path is read into steps", () => {
  assert.deepEqual(steps("heart.foci[2].rate_bpm"), ["heart", "foci", 2, "rate_bpm"]);
});

test("putting a value leaves the old plan as it was and shares what stayed", () => {
  const plan = { format: "f", heart: { sinus: { rate_bpm: 60 }, atria: { erp_ms: 200 } } };
  const next = put(plan, "heart.sinus.rate_bpm", 90);
  assert.equal(plan.heart.sinus.rate_bpm, 60);
  assert.equal(get(next, "heart.sinus.rate_bpm"), 90);
  assert.equal(next.heart.atria, plan.heart.atria);
});

test("putting below null or nothing makes the objects on the way", () => {
  assert.deepEqual(put({ heart: { right_bundle: null } }, "heart.right_bundle.erp_ms", 400), { heart: { right_bundle: { erp_ms: 400 } } });
  assert.deepEqual(put({}, "interventions[0]", { at_ms: 1 }), { interventions: [{ at_ms: 1 }] });
});

test("dropping the last value drops the objects that held it", () => {
  assert.deepEqual(drop({ format: "f", heart: { sinus: { rate_bpm: 60 } } }, "heart.sinus.rate_bpm"), { format: "f" });
});

test("dropping a list's member moves the others up, and the last takes the list along", () => {
  assert.deepEqual(drop({ l: [{ a: 1 }, { a: 2 }] }, "l[0]"), { l: [{ a: 2 }] });
  assert.deepEqual(drop({ f: 1, l: [{ a: 1 }] }, "l[0]"), { f: 1 });
});

test("put and get agree, and drop undoes put on a plan that lacked the place", () => {
  for (const path of ["a", "a.b.c", "heart.av_node.fast.ah_ms"]) {
    assert.equal(get(put({}, path, 7), path), 7);
    assert.deepEqual(drop(put({}, path, 7), path), {});
  }
});

test("a part that is there stays there without its last value", () => {
  assert.deepEqual(dropWithin({ format: "f", pacemaker: { pvarp_ms: 300 } }, "pacemaker.pvarp_ms", "pacemaker"), { format: "f", pacemaker: {} });
  assert.deepEqual(dropWithin({ pacemaker: { loop: { beats: 8 } } }, "pacemaker.loop.beats", "pacemaker"), { pacemaker: {} });
  assert.deepEqual(dropWithin({ format: "f" }, "pacemaker.pvarp_ms", "pacemaker"), { format: "f" });
  assert.deepEqual(dropWithin({ heart: { atria: { erp_ms: 1 } } }, "heart.atria.erp_ms", ""), {});
});

test("the ladder goes by the room there is until a form is chosen", () => {
  assert.equal(ladderFor(FIRST_VIEW, 759), "plain");
  assert.equal(ladderFor(FIRST_VIEW, 760), "full");
  assert.equal(ladderFor({ ...FIRST_VIEW, ladder: "plain", ladder_chosen: true }, 900), "plain");
});

test("a mode's letters are told in words", () => {
  assert.equal(modeWords("DDDR"), "paces both chambers, senses both chambers, tracks P, is inhibited by R, rate by sensor");
  assert.equal(modeWords("VOO"), "paces ventricle, senses nothing");
});

test("a number that the mode does not use lies idle", () => {
  for (const [path, code, want] of /** @type {[string, string, boolean][]} */ ([
    ["pvarp_ms", "VVI", true], ["pvarp_ms", "VDD", false], ["pvarp_ms", "DDIR", false], ["sensed_av_ms", "DDI", true], ["paced_av_ms", "DDI", false],
    ["paced_av_ms", "VDD", true], ["ventricular_refractory_ms", "AAI", true], ["lower_rate_bpm", "VVI", false], ["pvarp_ms", "nonsense", false],
  ])) assert.equal(idle(`pacemaker.${path}`, code), want, `${path} in ${code}`);
});

test("folded numbers of the device carry their heading", () => {
  assert.equal(headingOf("pacemaker.night.to_ms"), "night: ");
  assert.equal(headingOf("pacemaker.leads.far_field_ms"), "far field and T wave: ");
  assert.equal(headingOf("pacemaker.lower_rate_bpm"), "");
});

test("a diagnosis below a row's place belongs to the row", () => {
  assert.equal(covers("interventions[0].extras_ms", "interventions[0].extras_ms[1]"), true);
  assert.equal(covers("heart.sinus", "heart.sinusoid"), false);
});

test("typed text is a number where it reads as one", () => {
  for (const [text, want] of /** @type {[string, any][]} */ ([["80", 80], [" 80,5 ", 80.5], ["−3", -3], ["", undefined], ["  ", undefined], ["3:2", "3:2"], ["8o", "8o"], ["1e3", 1000]])) {
    assert.equal(typed(text), want, JSON.stringify(text));
  }
});

test("numbers lose empty digits", () => {
  assert.equal(num(80), "80");
  assert.equal(num(0.27), "0.27");
  assert.equal(num(-30), "−30");
  assert.equal(num(-0.001), "0");
  assert.equal(num(NaN), "–");
});

test("time and pixels are each other's inverse", () => {
  const s = timeScale(1000, 50, 25, 3.78);
  assert.ok(Math.abs(tOf(s, xOf(s, 4321)) - 4321) < 1e-9);
});

/** @param {any} patch */
const state = (patch = {}) => /** @type {any} */ ({ plan: {}, selected: 0, view: FIRST_VIEW, ...patch });

test("edits of one name are one step of undo, another name begins the next", () => {
  const store = createStore(state({ plan: { n: 0 } }));
  store.edit({ n: 1 }, "type a");
  store.edit({ n: 12 }, "type a");
  store.edit({ n: 12, m: 1 }, "type b");
  assert.equal(store.undo(), true);
  assert.deepEqual(store.get().plan, { n: 12 });
  assert.equal(store.undo(), true);
  assert.deepEqual(store.get().plan, { n: 0 });
  assert.equal(store.undo(), false);
  store.redo();
  assert.deepEqual(store.get().plan, { n: 12 });
});

test("a settled edit of the same name is another step", () => {
  const store = createStore(state({ plan: { n: 0 } }));
  store.edit({ n: 1 }, "type a");
  store.settle();
  store.edit({ n: 2 }, "type a");
  store.undo();
  assert.deepEqual(store.get().plan, { n: 1 });
});

test("undo brings back what a change changed, and only that", () => {
  const store = createStore(state({ plan: { n: 0 }, preset: "a" }));
  store.change({ view: { ...FIRST_VIEW, leads: ["II"] } }, "");
  store.edit({ n: 1 }, "", { preset: "b", selected: 4 });
  store.set({ view: { ...store.get().view, t0_ms: 700 } });
  store.undo();
  assert.deepEqual([store.get().plan, store.get().preset, store.get().selected], [{ n: 0 }, "a", 4]);
  assert.deepEqual(store.get().view.leads, ["II"], "a choice made before the edit stays");
  store.undo();
  assert.deepEqual(store.get().view, { ...FIRST_VIEW, t0_ms: 700 }, "panning is not taken back");
  assert.equal(store.canUndo(), false);
  store.redo();
  store.redo();
  assert.deepEqual([store.get().plan, store.get().preset, store.get().view.leads], [{ n: 1 }, "b", ["II"]]);
});

test("panning and zooming make no step", () => {
  const store = createStore(state());
  store.change({ view: { ...FIRST_VIEW, t0_ms: 500, mm_per_s: 50 } }, "");
  assert.equal(store.canUndo(), false);
  assert.equal(store.get().view.t0_ms, 500);
});

test("a stroke that is put back by hand leaves nothing to undo", () => {
  const plan = { n: 0 };
  const store = createStore(state({ plan }));
  store.edit({ n: 1 }, "move 0");
  store.edit(plan, "move 0");
  assert.equal(store.canUndo(), false);
  store.edit({ n: 2 }, "move 0");
  store.undo();
  assert.equal(store.get().plan, plan);
});

test("a new change lets go of what was undone", () => {
  const store = createStore(state({ plan: { n: 0 } }));
  store.edit({ n: 1 }, "");
  store.undo();
  store.edit({ n: 2 }, "");
  assert.equal(store.redo(), false);
});

test("listeners hear only of what changed", () => {
  const store = createStore(state());
  /** @type {string[][]} */
  const heard = [];
  store.subscribe((_s, changed) => heard.push([...changed]));
  store.set({ selected: 0 });
  store.set({ selected: 3 });
  assert.deepEqual(heard, [["selected"]]);
});

const view = { ...FIRST_VIEW, width_mm: 100, mm_per_s: 25 }; // 4 s

test("a view stays on the strip", () => {
  assert.equal(shown(view), 4000);
  assert.equal(pan(view, -500, 12000).t0_ms, 0);
  assert.equal(pan(view, 1e6, 12000).t0_ms, 8000);
  assert.equal(onStrip({ ...view, t0_ms: 500 }, 3000).t0_ms, 0);
});

test("zooming keeps the instant under the hand where it is", () => {
  const v = { ...view, t0_ms: 2000 };
  const z = zoomTo(v, 50, 3000, 12000);
  const at = (/** @type {typeof v} */ w) => (3000 - w.t0_ms) * w.mm_per_s;
  assert.ok(Math.abs(at(z) - at(v)) < 1e-9);
});

test("the whole strip fits at the speed said to fit", () => {
  assert.equal(shown({ ...view, mm_per_s: fitSpeed(view, 12000) }), 12000);
  assert.equal(zoomTo(view, 0.001, 0, 12000).mm_per_s, fitSpeed(view, 12000));
});

test("revealing moves only what is needed", () => {
  assert.equal(reveal(view, 2000, 12000), view);
  const far = reveal(view, 9000, 12000);
  assert.ok(far.t0_ms < 9000 && far.t0_ms + shown(far) > 9000);
});

const scene = readScene({
  width: 100, height: 50, font_mm: 3, axis: { t0_us: 1000000, x0: 10, mm_per_s: 25 }, lanes: [],
  marks: 5, classes: ["wave", "atrium", "sinus", "dim-text", "trace"], texts: ["120"],
}, new Float32Array([
  3, 0, 10, 0, 30, 20, 0, 0, 0, 5, 0,
  1, 1, 20, 10, 22, 20, 0, 0, 0, 7, 0,
  4, 2, 20, 10, 0, 0, 1, 0, 0, 6, 0,
  6, 3, 1, 2, 0, 0, 0, 1, 1, 0, 0,
  2, 4, 0, 0, 0, 0, 0, 0, 0, 0, 2,
  1, 2, 3, 4,
]));

test("a scene's marks are read from their numbers and its axis is one map", () => {
  assert.deepEqual([scene.marks[0].cls, scene.marks[0].event, scene.marks[3].text, scene.marks[3].anchor], ["wave", 5, "120", 1]);
  const line = scene.marks[4];
  assert.deepEqual([...scene.points.subarray(line.from, line.from + 2 * line.count)], [1, 2, 3, 4]);
  assert.equal(timeAt(scene, 35), 2000);
  assert.equal(placeOf(scene, 2000), 35);
});

test("the nearest mark wins, the later of equals, an area only where nothing else is", () => {
  assert.equal(nearest(scene, 20, 10, 2)?.event, 6);
  assert.equal(nearest(scene, 21.5, 18, 2)?.event, 7);
  assert.equal(nearest(scene, 12, 3, 2)?.event, 5);
  assert.equal(nearest(scene, 80, 40, 2), null);
});

test("the bar puts the normal range in its middle third", () => {
  /** @type {[number, number]} */
  const normal = [60, 100];
  assert.ok(Math.abs(fraction(60, normal) - 1 / 3) < 1e-12);
  assert.ok(Math.abs(fraction(100, normal) - 2 / 3) < 1e-12);
  assert.equal(fraction(1000, normal), 1);
  assert.ok(Math.abs(valueAt(fraction(75, normal), normal) - 75) < 1e-9);
  assert.equal(verdict(100, normal), "normal");
  assert.equal(verdict(101, normal), "high");
});

/** A handle as the engine gives it. @param {Partial<import("../model/handle.js").Handle>} about @returns {import("../model/handle.js").Handle} */
const handle = (about) => ({ event: 9, marks: [], end: true, fixed: false, t_ms: 2000, from_ms: 1750, per: 1, coupling_ms: -1, y0: 0, y1: 1, path: "pacemaker.pvarp_ms", label: "PVARP", unit: "ms", value: 250, min: 0, max: 600, step: 5, ...about });

test("a handle's value follows the pointer in steps, and stops at the end of its range", () => {
  const h = handle({});
  assert.deepEqual(handles.valueAt(h, 2013), { value: 265, limit: "" });
  assert.deepEqual(handles.valueAt(h, 9000), { value: 600, limit: "most" });
  assert.deepEqual(handles.valueAt(h, 0), { value: 0, limit: "least" });
  assert.equal(handles.timeOf(h, 300), 2050);
  assert.equal(handles.later(h, -10), 200);
});

test("a rate's handle goes by its interval: ten cycles of 800 ms, 100 ms later, are 810 ms each", () => {
  const h = handle({ path: "heart.sinus.rate_bpm", label: "sinus rate", unit: "/min", value: 75, min: 10, max: 220, step: 1, per: 10, end: false });
  assert.equal(handles.valueAt(h, 2100, 0.1).value, 74.1); // 60000/810 = 74.07
  assert.ok(Math.abs(handles.timeOf(h, 60000 / 810) - 2100) < 1e-6);
  assert.equal(handles.later(h, 1), 74); // later in time is a slower rate
  assert.equal(handles.stepFor(h, 0.0945), 0.1); // one whole step would leap 10 px
});

test("an outcome's flip stands between two values that were seen, and is then known exactly", () => {
  const finding = (/** @type {string} */ slug, /** @type {string} */ text) => ({ slug, ratio: "", text, events: [], t_ms: 0, note: "", rivals: [] });
  const log = flipLog();
  const [one, two] = [[finding("tracked", "Tracked 1:1 (AV 160 ms)")], [finding("pvarp", "Every other P in PVARP: 2:1")]];
  log.note(300, two);
  log.note(260, one);
  log.note(280, two);
  assert.deepEqual(log.flips().map((f) => [f.low, f.high, f.below, f.above, f.exact]), [[260, 280, "Tracked 1:1", "Every other P in PVARP", false]]);
  log.found(260, 280, 274, 275);
  assert.deepEqual(log.known().map((f) => [f.low, f.high, f.exact]), [[274, 275, true]]);
});

test("choices of a view are kept, where one looks is not, and what is not of the right kind is left out", () => {
  const chosen = { ...FIRST_VIEW, t0_ms: 4000, lanes: ["lead:II", "ladder"], leads: ["II"], mm_per_mv: 20, ladder: /** @type {const} */ ("full"), ladder_chosen: true };
  const kept = JSON.parse(JSON.stringify(choices(chosen)));
  assert.deepEqual(withChoices(FIRST_VIEW, kept), { ...chosen, t0_ms: 0 });
  for (const [name, odd] of /** @type {[string, any][]} */ ([
    ["nothing", undefined], ["null", null], ["a text", "x"], ["a paper that is not known", { paper: "9x9" }], ["a gain of nothing", { mm_per_mv: 0 }],
    ["no lanes", { lanes: [], leads: [] }], ["lanes that are no texts", { lanes: [1], leads: ["II"] }], ["leads that are no lanes", { leads: ["aVR"] }],
    ["a lead that is not known", { lanes: ["lead:X"], leads: ["X"] }], ["a ladder that is not known", { ladder: "tall" }], ["a lane of an unknown kind", { lanes: ["lead:II", "odd:1"], leads: ["II"] }],
  ])) assert.deepEqual(withChoices(FIRST_VIEW, odd), FIRST_VIEW, name);
});
