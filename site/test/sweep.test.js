// What a map stands on without a page: the order of points, columns that come in any
// order, lines of equal value, when a map is of an earlier plan, room around settings.

import assert from "node:assert/strict";
import { test } from "node:test";
import { byMeaning, lookOf } from "../model/behaviour.js";
import { contour, levels } from "../model/contour.js";
import { renamed, roomAround, tightest, without } from "../model/goals.js";
import { coarseToFine, createGrid, writeCSV } from "../model/grid.js";
import { axisOver, mapKey, nice, planAt, valueCount } from "../model/sweep.js";

const HEAD = {
  title: "t", seeds: [1], of: 4,
  x: { name: "a", label: "A", unit: "ms", values: [1, 2] }, y: { name: "b", label: "B", unit: "", values: ["p", null] },
};

/** @param {number[]} points @returns {import("../model/grid.js").Slice} */
const slice = (points) => ({
  points, refused: { list: ["no, \"never\""], at: points.map((p) => (p === 3 ? 0 : -1)) },
  columns: [
    { name: "pattern", label: "", kind: "word", words: { list: points.map((p) => `${p}:1`), at: points.map((_, i) => i) } },
    { name: "rate", label: "", unit: "/min", kind: "number", number: points.map((p) => (p === 2 ? null : p * 10)) },
  ],
});

test("every point comes once, every sixteenth row and column first", () => {
  for (const [nx, ny] of [[1, 1], [5, 1], [100, 100], [17, 3]]) {
    const order = coarseToFine(nx, ny);
    assert.equal(new Set(order).size, nx * ny);
    assert.equal(order.length, nx * ny);
  }
  assert.deepEqual(coarseToFine(18, 1).slice(0, 5), [0, 16, 8, 4, 12]);
});

test("a table is the same in whatever order the points came", () => {
  const [a, b] = [createGrid(HEAD), createGrid(HEAD)];
  a.put(slice([0, 1, 2, 3]));
  for (const p of [3, 1, 0, 2]) b.put(slice([p]));
  assert.equal(writeCSV(a), writeCSV(b));
  assert.equal(writeCSV(a), 'a,b,pattern,rate,refused\n1,p,0:1,0,\n2,p,1:1,10,\n1,null,2:1,,\n2,null,,,"no, ""never"""\n');
});

test("a coarse point stands for those around it until they are there", () => {
  const g = createGrid({ ...HEAD, of: 20, x: { ...HEAD.x, values: Array.from({ length: 20 }, (_, i) => i) }, y: null });
  assert.equal(g.stand(3), -1);
  g.put({ ...slice([0]), points: [0] });
  assert.equal(g.stand(3), 0);
  g.put({ ...slice([2]), points: [2] });
  assert.equal(g.stand(3), 2);
});

test("lines of equal value lie where the value is even between points", () => {
  assert.deepEqual(levels(60, 180), [80, 100, 120, 140, 160]);
  assert.deepEqual(levels(5, 5), []);
  const [line] = contour(3, 3, (x) => x * 10, 15);
  assert.deepEqual(line.map(([x]) => x), [1.5, 1.5, 1.5]);
  assert.equal(contour(4, 4, (x, y) => (x === 1 && y === 1 ? 1 : 0), 0.5)[0].length, 5); // closed about one point
  assert.deepEqual(contour(2, 2, (x) => (x === 0 ? NaN : 1), 0.5), []);
});

test("the same behaviour looks the same on every map, and no two of a map do", () => {
  const words = ["1:1", "7:6", "6:5", "5:4", "4:3", "3:2", "5:3", "2:1", "3:1", "4:0", "varies"];
  assert.deepEqual([...words].reverse().sort(byMeaning), words);
  assert.equal(new Set(words.map((w) => JSON.stringify(lookOf("pattern", w, 0)))).size, words.length);
  assert.deepEqual(lookOf("pattern", "2:1", 1), lookOf("pattern", "2:1", 7));
});

test("a map is of an earlier plan only where something that it does not vary changed", () => {
  const plan = { format: "f", pacemaker: { pvarp_ms: 250 }, sweep: { x: { field: "pacemaker.pvarp_ms", from: 200, to: 300, step: 10 } } };
  assert.equal(mapKey(planAt(plan, [290])), mapKey(plan));
  assert.equal(mapKey({ ...plan, title: "another" }), mapKey(plan));
  assert.notEqual(mapKey({ ...plan, span_ms: 5000 }), mapKey(plan));
  assert.notEqual(mapKey({ ...plan, sweep: { x: { ...plan.sweep.x, step: 5 } } }), mapKey(plan));
});

test("a range begins with round numbers about what is normal and what the plan has", () => {
  const field = /** @type {any} */ ({ path: "heart.sinus.rate_bpm", label: "sinus rate", unit: "/min", kind: "number", min: 10, max: 220, default: 75, normal: { low: 60, high: 100 } });
  const axis = axisOver({ path: field.path, label: "", where: "", field }, { format: "f", heart: { sinus: { rate_bpm: 130 } } }, /** @type {any} */ ({ modes: [] }));
  assert.deepEqual(axis, { field: field.path, from: 60, to: 210, step: 5 });
  assert.equal(valueCount(axis), 31);
  assert.deepEqual([0.003, 1, 1.2, 37].map(nice), [0.005, 1, 2, 50]);
});

test("room around settings goes by the engine's numbers, the first fastest", () => {
  const settings = [{ values: [1, 2, 3] }, { values: ["a", "b"] }];
  assert.deepEqual(roomAround(settings, new Set([0, 1, 4]), 1), [{ low: 1, high: 2, steps: 2 }, { low: "a", high: "b", steps: 2 }]);
});

test("a renamed situation is renamed where goals speak of it; lists that empty go", () => {
  const goals = /** @type {any} */ ({ settings: [], situations: [{ name: "rest" }, { name: "run" }], must: [{ outcome: "pattern", in: ["run"], equal: "1:1" }] });
  assert.deepEqual(renamed(goals, 1, "climb").must?.[0].in, ["climb"]);
  assert.equal(without(goals, "must", 0).must, undefined);
  assert.equal(tightest([{ margin: null, value: null }, { margin: 100, value: 200 }, { margin: 5, value: 100 }]), 2);
});
