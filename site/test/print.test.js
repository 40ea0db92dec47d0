// Print and export in a real browser: what the dialog saves is what the native
// handler answers, and what is printed is what the page paints.

import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { describe, test } from "node:test";
import { readScene } from "../engine/scene.js";
import { orderOf } from "../model/order.js";
import { openPage, settled } from "./host.js";
import { AH, openPreset, person, stage } from "./walk.js";

/** @typedef {import("playwright-core").Page} Page */

/** Writes down what the page's workers are asked and the last scene that came back. */
function listen() {
  const heard = /** @type {any} */ (window);
  heard.asked = [];
  const Native = window.Worker;
  window.Worker = class extends Native {
    /** @param {string | URL} url @param {WorkerOptions} [options] */
    constructor(url, options) {
      super(url, options);
      this.addEventListener("message", (e) => {
        if (!e.data.points) return;
        const told = JSON.parse(e.data.json);
        heard.scene = { meta: told.scene ?? told, points: Array.from(e.data.points) };
      });
    }

    /** @param {any} message @param {any} [more] */
    postMessage(message, more) {
      if (message.body) heard.asked.push(message);
      super.postMessage(message, more);
    }
  };
}

/** @param {(page: Page, url: string) => Promise<void>} walk */
async function listening(walk) {
  const { context, url } = await person({ acceptDownloads: true });
  await context.addInitScript(listen);
  const { page, faults } = await openPage(context, url);
  try {
    await settled(page);
    await walk(page, url);
    assert.deepEqual(faults, []);
  } finally {
    await context.close();
  }
}

/** @param {Page} page */
const drawn = (page) => page.waitForFunction(() => document.querySelector("dialog.print")?.getAttribute("aria-busy") === "false" && !document.querySelector(".print-frame.stale"), null, { timeout: 120000 });

/** Saves, and gives the file with its name. @param {Page} page */
async function saved(page) {
  const [file] = await Promise.all([page.waitForEvent("download", { timeout: 120000 }), page.click("#print-save")]);
  await page.waitForFunction(() => /^Saved as/.test(document.querySelector(".print-says")?.textContent ?? ""), null, { timeout: 120000 });
  return { name: file.suggestedFilename(), bytes: readFileSync(/** @type {string} */ (await file.path())) };
}

/** What the native handler answers to what the page last asked its own. @param {Page} page @param {string} url */
async function native(page, url) {
  const { url: asked, body } = await page.evaluate(() => /** @type {any} */ (window).asked.at(-1));
  const response = await fetch(new URL(new URL(asked).pathname, url), { method: "POST", body });
  assert.equal(response.status, 200);
  return Buffer.from(await response.arrayBuffer());
}

describe("print and export", () => {
  stage();

  test("Ctrl P shows a preview, and every form is saved with the bytes of the native handler", () => listening(async (page, url) => {
    await openPreset(page, "dual-upper-rate-wenckebach");
    assert.equal(await page.evaluate(() => /** @type {any} */ (window).asked.length), 0, "the service was asked before anything was to be printed");
    await page.keyboard.press("Control+p");
    await drawn(page);
    await page.waitForFunction(() => (/** @type {HTMLImageElement} */ (document.querySelector(".print-picture"))).naturalWidth > 300);
    assert.match(await page.inputValue("#print-date"), /^\d{4}-\d\d-\d\d$/);
    for (const [print, format, begins, name] of [
      ["strip", "pdf", "%PDF", "upper-rate-wenckebach-at-sinus-131-strip.pdf"],
      ["ladder", "svg", "<svg", "upper-rate-wenckebach-at-sinus-131-ladder.svg"],
      ["twelve", "pdf", "%PDF", "upper-rate-wenckebach-at-sinus-131-twelve.pdf"],
      ["report", "pdf", "%PDF", "upper-rate-wenckebach-at-sinus-131-report.pdf"],
      ["data", "edf", "0  ", "upper-rate-wenckebach-at-sinus-131.edf"],
      ["data", "csv", "", "upper-rate-wenckebach-at-sinus-131.csv"],
      ["data", "json", "{", "upper-rate-wenckebach-at-sinus-131.json"],
    ]) {
      await page.selectOption("#print-print", print);
      await page.selectOption("#print-format", format);
      await page.waitForTimeout(300);
      await drawn(page);
      const file = await saved(page);
      assert.equal(file.name, name);
      assert.equal(file.bytes.subarray(0, begins.length).toString(), begins, print);
      const there = await native(page, url);
      assert.deepEqual([file.bytes.length, file.bytes.equals(there)], [there.length, true], `${print}.${format} differs from the native handler's`);
      assert.ok(file.bytes.length > 2000, `${print}.${format}: ${file.bytes.length} bytes`);
    }
  }));

  test("what has no room on the paper is told, and another choice mends it", () => listening(async (page) => {
    await openPreset(page, "lbbb");
    await page.click("#print");
    await drawn(page);
    await page.selectOption("#print-print", "twelve");
    await page.selectOption("#print-ladder", "full");
    await page.selectOption("#print-gain", "20");
    await page.waitForSelector(".print-wrong li", { timeout: 120000 });
    assert.match(await page.innerText(".print-wrong"), /paper: the drawing needs \d+ mm of height, there are 210 mm/);
    assert.equal(await page.isDisabled("#print-save"), true);
    await page.selectOption("#print-gain", "5");
    await page.waitForFunction(() => document.querySelector(".print-wrong")?.textContent === "", null, { timeout: 120000 });
    await page.selectOption("#print-ladder", "none");
    await page.waitForTimeout(300);
    await drawn(page);
    assert.equal(await page.isDisabled("#print-save"), false);
    assert.equal(await page.isVisible(".print-picture"), true);
  }));

  test("with a strip kept as before, both are printed on one page, with the lanes of the timeline", () => listening(async (page, url) => {
    await openPreset(page, "dual-treadmill-two-to-one");
    await page.click("#keep-before");
    await openPreset(page, "dual-one-to-one-to-140");
    await page.click("#print");
    assert.equal(await page.inputValue("#print-print"), "comparison", "with a strip before, both are what one wants");
    await drawn(page);
    assert.equal(await page.innerText(".print-wrong"), "");
    const file = await saved(page);
    assert.equal(file.bytes.subarray(0, 4).toString(), "%PDF");
    assert.ok(file.bytes.equals(await native(page, url)), "differs from the native handler's");
    const order = await page.evaluate(() => JSON.parse(/** @type {any} */ (window).asked.at(-1).body));
    assert.deepEqual([order.before.title, order.plan.title], ["Treadmill: the rate halves at 130", "Settings that follow the sinus to 140"]);
    assert.ok(order.lanes.includes("ladder") && order.lanes.includes("device"), order.lanes.join());
    await page.keyboard.press("Escape");
    await page.click("#keep-before"); // let go
    await page.click("#print");
    assert.equal(await page.inputValue("#print-print"), "strip");
    assert.equal(await page.locator('#print-print option[value="comparison"]').isDisabled(), true);
  }));

  test("a plan with wrong values is not printed, and the dialog says so", () => listening(async (page) => {
    await page.fill(AH, "5000");
    await page.waitForSelector(".row.wrong");
    await page.click("#print");
    assert.match(await page.innerText(".print-says"), /1 value of the plan is wrong/);
    assert.equal(await page.isDisabled("#print-save"), true);
    await page.keyboard.press("Escape");
    assert.equal(await page.evaluate(() => document.activeElement?.id), "print");
  }));

  test("the service that cannot be loaded is told, and can be tried again", async () => {
    const { context, url } = await person();
    const { page } = await openPage(context, url);
    try {
      await settled(page);
      await context.route("**/app.wasm", (r) => r.fulfill({ status: 404 }));
      await page.click("#print");
      await page.waitForSelector(".print-wrong pre", { timeout: 60000 });
      assert.match(await page.innerText(".print-wrong"), /print service failed.*app\.wasm: the server answered 404/s);
      await context.unroute("**/app.wasm");
      await page.click(".print-wrong button");
      await page.waitForSelector(".print-picture:not([hidden])", { timeout: 120000 });
    } finally {
      await context.close();
    }
  });

  test("the print holds the marks of the page's canvas at the same instants, and lead II is the same picture", () => listening(async (page, url) => {
    await openPreset(page, "pvc-full-pause");
    const heard = await page.evaluate(() => /** @type {any} */ (window).scene);
    const scene = readScene(heard.meta, new Float32Array(heard.points));
    const from = scene.axis.t0_us / 1000;
    const trace = scene.marks.filter((m) => m.cls === "trace");
    const last = trace[0].from + 2 * (trace[0].count - 1);
    const to = from + ((scene.points[last] - scene.axis.x0) / scene.axis.mm_per_s) * 1000;
    const query = new URLSearchParams({ plan: "pvc-full-pause", paper: "roll", ladder: heard.meta.tiers.length > 3 ? "full" : "plain", leads: "I,II,V1,V6", from_ms: String(from), to_ms: String(to + 2) });
    const svg = await (await fetch(`${url}press/strip.svg?${query}`)).text();

    // Places: by class and event, where strokes and discs begin. 0.02 mm is 0.8 ms of strip.
    /** @type {Map<string, number[]>} */
    const printed = new Map();
    for (const [, path, classes] of svg.matchAll(/<path d="M(-?[\d.]+)[^"]*"[^>]*class="([^"]+)"/g)) put(printed, classes, Number(path));
    if (printed.size === 0) for (const [, classes, path] of svg.matchAll(/<path class="([^"]+)" d="M(-?[\d.]+)/g)) put(printed, classes, Number(path));
    const left = Math.min(...(printed.get("trace") ?? []));
    assert.ok(Number.isFinite(left), "no trace in the print");
    let compared = 0;
    for (const m of scene.marks) {
      if (m.event === 0 || m.shape !== 1 || !["sinus", "atrium", "node", "his", "bundle-left", "bundle-right", "ventricle", "block"].includes(m.cls)) continue;
      const there = printed.get(`${m.cls} e${m.event}`);
      assert.ok(there, `${m.cls} of event ${m.event} is not on the print`);
      const x = m.x - scene.axis.x0;
      assert.ok(there.some((p) => Math.abs(p - left - x) < 0.02), `${m.cls} of event ${m.event} stands at ${x} mm, on the print at ${there.map((p) => p - left)}`);
      compared++;
    }
    assert.ok(compared > 40, `${compared} marks`);

    // The picture of lead II: of the trace's dots at 96 an inch, at most 1 in 100 has no
    // dot of the other within one dot.
    const lane = scene.lanes.find((l) => l.name === "lead:II");
    assert.ok(lane);
    const own = trace[1];
    const ownTop = Math.min(...Array.from({ length: own.count }, (_, k) => scene.points[own.from + 2 * k + 1]));
    const paths = [...svg.matchAll(/<path[^>]*>/g)].map((m) => m[0]).filter((p) => /class="trace"/.test(p));
    const stray = await page.evaluate(compare, { svg, lane, x0: scene.axis.x0, dx: left - scene.axis.x0, dy: highest(/d="([^"]+)"/.exec(paths[1])?.[1] ?? "") - ownTop, right: scene.points[last] });
    assert.ok(stray.dots > 500, JSON.stringify(stray));
    assert.ok(stray.alone / stray.dots < 0.01, JSON.stringify(stray));
  }));

  test("an order holds what is chosen and what the timeline shows", () => {
    const state = /** @type {any} */ ({ plan: { title: "x" }, answer: { span_ms: 12000 }, view: { t0_ms: 4000, width_mm: 100, mm_per_s: 25, leads: ["II"], lanes: ["egm:V", "lead:II", "axis", "ladder"], egm_gain: 20, paper: "" } });
    const choice = { print: "strip", format: "pdf", paper: "a4", range: "view", speed: 25, gain: 10, ladder: /** @type {const} */ ("full"), device: true, form: "3x4 + rhythm", date: "2026-12-01", page: 1 };
    for (const [name, patch, want] of /** @type {[string, any, any][]} */ ([
      ["the part shown", {}, { from_ms: 4000, to_ms: 8000, fill: true, leads: undefined, lanes: ["egm:V", "lead:II", "axis", "ladder", "device"], egm_gain: 20, paper_form: undefined }],
      ["without the device", { device: false }, { lanes: ["egm:V", "lead:II", "axis", "ladder"] }],
      ["the whole", { range: "whole" }, { from_ms: 0, to_ms: 12000, fill: undefined }],
      ["ten seconds of twelve leads", { print: "twelve" }, { from_ms: 2000, to_ms: 12000, lanes: undefined, paper_form: "3x4 + rhythm" }],
      ["one line of a report", { print: "report" }, { from_ms: 4000, to_ms: 0 }],
      ["data", { print: "data" }, { from_ms: undefined, date: undefined, plan: state.plan }],
      ["a ladder there is", { print: "ladder", ladder: "none" }, { ladder: "full" }],
    ])) {
      const got = /** @type {any} */ (orderOf(state, { ...choice, ...patch }));
      for (const k of Object.keys(want)) assert.deepEqual(got[k], want[k], `${name}: ${k}`);
    }
  });
});

/** The least y of a path of straight strokes, in absolute coordinates. @param {string} d */
function highest(d) {
  let least = Infinity;
  for (const [, letter, a, b] of d.matchAll(/([MLHV])?(-?[\d.]+(?:e-?\d+)?)(?:[ ,]?(-?[\d.]+(?:e-?\d+)?))?/g)) {
    if (letter === "H") continue;
    least = Math.min(least, Number(letter === "V" ? a : b));
  }
  return least;
}

/** @param {Map<string, number[]>} map @param {string} key @param {number} v */
function put(map, key, v) {
  const list = map.get(key);
  if (list) list.push(v);
  else map.set(key, [v]);
}

/**
 * Counts, in the page, the dots of the trace that one picture has alone.
 * @param {{svg: string, lane: {y0: number, y1: number}, x0: number, dx: number, dy: number, right: number}} q
 */
async function compare({ svg, lane, x0, dx, dy, right }) {
  const k = 96 / 25.4;
  const canvas = /** @type {HTMLCanvasElement} */ (document.querySelector("#timeline canvas"));
  const image = new Image();
  image.src = `data:image/svg+xml,${encodeURIComponent(svg)}`;
  await image.decode();
  const [w, h] = [Math.floor((right - x0) * k), Math.floor((lane.y1 - lane.y0) * k)];
  const [left, top] = [Math.round(x0 * k), Math.round(lane.y0 * k)]; // whole dots, so that nothing is drawn again between them
  const darkness = (/** @type {(g: OffscreenCanvasRenderingContext2D) => void} */ draw) => {
    const g = /** @type {OffscreenCanvasRenderingContext2D} */ (new OffscreenCanvas(w, h).getContext("2d"));
    draw(g);
    const d = g.getImageData(0, 0, w, h).data;
    return Array.from({ length: w * h }, (_, i) => 765 - d[4 * i] - d[4 * i + 1] - d[4 * i + 2]);
  };
  const page = darkness((g) => g.drawImage(canvas, -left, -top));
  const print = darkness((g) => {
    g.fillStyle = "#fff";
    g.fillRect(0, 0, w, h);
    g.setTransform(k, 0, 0, k, -left, -top);
    const [, width, height] = /width="([\d.]+)mm" height="([\d.]+)mm"/.exec(svg) ?? [];
    g.drawImage(image, -dx, -dy, Number(width), Number(height));
  });
  // A dot is of the trace where it is dark; half as dark is enough beside it, since a
  // line between two rows of dots is grey in both. The grid is lighter than either.
  const near = (/** @type {number[]} */ a, /** @type {number} */ i) => [-w - 1, -w, -w + 1, -1, 0, 1, w - 1, w, w + 1].some((o) => a[i + o] > 220);
  let [all, alone] = [0, 0];
  for (let i = 0; i < w * h; i++) {
    for (const [a, b] of [[page, print], [print, page]]) {
      if (a[i] < 440) continue;
      all++;
      if (!near(b, i)) alone++;
    }
  }
  return { dots: all, alone };
}
