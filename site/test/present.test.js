// What comes next, covered: nothing tells it, and it is revealed beat by beat. The
// sheet as a picture.

import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { covered, stopFrom, stops } from "../model/cover.js";
import { openPage, settled } from "./host.js";
import { onPage, openPreset, person, stage } from "./walk.js";

/** @typedef {import("playwright-core").Page} Page */

/** @param {number[]} atrium @param {number[]} ventricle */
const overview = (atrium, ventricle) => /** @type {any} */ ({ atrium, ventricle });

test("a beat is over after its ventricular wave; a blocked P is a beat of its own", () => {
  // P 0, QRS 200; P 800, blocked; P 1600, QRS 1750; a premature QRS at 1900.
  assert.deepEqual(stops(overview([0, 800, 1600], [200, 1750, 1900]), 5000), [
    { t: 120, beat: false }, { t: 580, beat: true }, { t: 920, beat: true }, { t: 1720, beat: false },
    { t: 1880, beat: true }, { t: 2280, beat: true },
  ]);
});

test("two waves at once are one stop, and the strip's end is the last", () => {
  assert.deepEqual(stops(overview([1000], [1000]), 1200), [{ t: 1200, beat: true }]);
  assert.deepEqual(stops(overview([], []), 1200), []);
});

test("stops are walked both ways, by beat or by wave", () => {
  const all = stops(overview([0, 800], [200, 1000]), 5000);
  assert.equal(stopFrom(all, 0, 1, true, 5000), 580);
  assert.equal(stopFrom(all, 0, 1, false, 5000), 120);
  assert.equal(stopFrom(all, 580, 1, false, 5000), 920);
  assert.equal(stopFrom(all, 1380, 1, true, 5000), 5000);
  assert.equal(stopFrom(all, 1380, -1, true, 5000), 580);
  assert.equal(stopFrom(all, 10, -1, true, 5000), 580, "the first beat is never covered");
});

test("marks that would tell what comes are gone, wherever they stand", () => {
  const mark = (/** @type {any} */ m) => ({ shape: 1, cls: "atrium", x: 0, y: 0, x2: 0, y2: 0, r: 0, text: "", anchor: 0, event: 0, from: 0, count: 0, ...m });
  const scene = /** @type {any} */ ({
    axis: { t0_us: 0, x0: 0, mm_per_s: 10 }, times: [[1, 500, 0], [2, 1500, 0]],
    marks: [
      mark({ cls: "grid-major" }), mark({ event: 1, x2: 5 }), mark({ event: 2, x: 6, x2: 15 }),
      mark({ event: 2, shape: 6, cls: "block-label", x: 2, text: "a label before its event" }),
      mark({ event: 1, cls: "dim", x: 5, x2: 15 }), mark({ event: 1, cls: "dim-text", shape: 6, x: 8, text: "1000" }),
      mark({ event: 7, shape: 3, cls: "window", x: 5, x2: 20 }), mark({ event: 7, shape: 6, cls: "window-text", x: 6, text: "1500" }),
      mark({ shape: 6, cls: "note", text: "blocked" }),
    ],
  });
  assert.deepEqual(covered(scene, 1000).marks.map((/** @type {any} */ m) => `${m.cls} ${m.event}`), ["grid-major 0", "atrium 1", "window 7"]);
  assert.equal(covered(scene, 3000).marks.length, 8, "all but the legend when all is over");
});

/** Columns of the sheet, from the left, that hold more than paper, grid and axis. @param {Page} page */
const inked = (page) => page.evaluate(() => {
  const canvas = /** @type {HTMLCanvasElement} */ (document.querySelector("#timeline canvas"));
  const g = /** @type {OffscreenCanvasRenderingContext2D} */ (new OffscreenCanvas(canvas.width, canvas.height).getContext("2d", { willReadFrequently: true }));
  g.drawImage(canvas, 0, 0);
  const d = g.getImageData(0, 0, canvas.width, canvas.height).data;
  let last = 0;
  for (let x = 0; x < canvas.width; x++) {
    for (let y = 0; y < canvas.height * 0.3; y++) {
      const i = 4 * (y * canvas.width + x);
      if (d[i] + d[i + 1] + d[i + 2] < 3 * 110 && d[i + 2] < 120) last = x; // a lead's ink, not the blue edge
    }
  }
  return { last, width: canvas.width };
});

describe("a presentation", () => {
  stage();

  test("a teacher covers what comes, asks, and reveals it beat by beat", () => onPage(async (page) => {
    await openPreset(page, "wenckebach-4-3");
    await page.focus("#timeline");
    await page.keyboard.press("t");
    await settled(page);
    for (const part of ["#statement", "#settings", "#account", "#overview", ".toolbar", "#presets"]) assert.equal(await page.isHidden(part), true, part);
    assert.match(await page.innerText(".ask"), /^What comes after \d+\.\d\d s\?$/);
    const label = await page.getAttribute("#timeline canvas", "aria-label");
    assert.match(label ?? "", /Covered from/);
    assert.doesNotMatch(label ?? "", /block/i);
    const asked = [];
    const edges = [];
    for (let i = 0; i < 3; i++) {
      asked.push(await page.innerText(".ask"));
      const { last, width } = await inked(page);
      assert.ok(last < width * 0.85, `ink up to ${last} of ${width}`);
      edges.push(last);
      await page.keyboard.press(["Space", "ArrowRight", "Space"][i]);
      await settled(page);
    }
    assert.equal(new Set(asked).size, 3);
    assert.ok(edges[0] < edges[1], `${edges}`);
    await page.keyboard.press("ArrowLeft");
    await settled(page);
    assert.equal(await page.innerText(".ask"), asked[2]);
    await page.mouse.move(1100, 400);
    assert.equal(await page.isHidden(".hair"), true, "the hair line would find what is covered");
    await page.keyboard.press(".");
    await page.keyboard.press("k");
    assert.equal(await page.isHidden(".pin"), true);
    assert.equal(await page.locator("dialog[open]").count(), 0);
    await page.keyboard.press("End");
    await settled(page);
    assert.match(await page.innerText(".ask"), /4:3 AV block/);
    await page.keyboard.press("Escape");
    await settled(page);
    assert.equal(await page.isVisible("#statement"), true);
    assert.equal(await page.isHidden("#present"), true);
  }));

  test("it works by its buttons, and over the whole screen", () => onPage(async (page) => {
    await openPreset(page, "dual-endless-loop");
    await page.click("summary:text('File')");
    await page.click("#file-present");
    const first = await page.innerText(".ask");
    await page.click("#present-wave");
    await settled(page);
    assert.notEqual(await page.innerText(".ask"), first);
    await page.click("#present-back");
    await settled(page);
    assert.equal(await page.innerText(".ask"), first);
    await page.click(".present button:text('Full screen')");
    await page.waitForFunction(() => document.fullscreenElement !== null);
    await page.click("#present-leave");
    await page.waitForFunction(() => document.fullscreenElement === null);
    assert.equal(await page.isVisible("#settings"), true);
  }));
});

describe("a picture", () => {
  stage();

  test("the sheet is copied with title and caution on it, sharp", async () => {
    const { context, url } = await person({ permissions: ["clipboard-read", "clipboard-write"] });
    const { page, faults } = await openPage(context, url);
    await settled(page);
    await page.focus("#timeline");
    await page.keyboard.press("i");
    await page.waitForSelector('[data-notice="picture"]');
    const got = await page.evaluate(async () => {
      const [item] = await navigator.clipboard.read();
      const bitmap = await createImageBitmap(await item.getType("image/png"));
      const g = /** @type {OffscreenCanvasRenderingContext2D} */ (new OffscreenCanvas(bitmap.width, bitmap.height).getContext("2d", { willReadFrequently: true }));
      g.drawImage(bitmap, 0, 0);
      /** @param {number} from @param {number} to */
      const ink = (from, to) => {
        const d = g.getImageData(0, from, bitmap.width, to - from).data;
        let n = 0;
        for (let i = 0; i < d.length; i += 4) if (d[i] < 160) n++;
        return n;
      };
      const sheet = /** @type {HTMLElement} */ (document.querySelector("#timeline canvas"));
      return { width: bitmap.width, sheet: sheet.clientWidth, top: ink(0, 90), foot: ink(bitmap.height - 90, bitmap.height - 40) };
    });
    assert.ok(got.width > 2 * got.sheet, JSON.stringify(got));
    assert.ok(got.top > 500 && got.foot > 500, JSON.stringify(got));
    assert.deepEqual(faults, []);
    await context.close();
  });

  test("where nothing may be copied the picture is saved", async () => {
    const { context, url } = await person();
    await context.addInitScript(() => { navigator.clipboard.write = () => Promise.reject(new DOMException("no", "NotAllowedError")); });
    const { page } = await openPage(context, url);
    await settled(page);
    const saving = page.waitForEvent("download");
    await page.click("summary:text('File')");
    await page.click("#file-picture");
    assert.match((await saving).suggestedFilename(), /^[a-z0-9-]+\.png$/);
    await context.close();
  });
});
