// Calipers and the overview: measuring on the sheet, and going to where findings are.

import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { firstPlaces, marched, NO_CALIPERS, nextInstant, readings, snapped } from "../model/calipers.js";
import { settled } from "./host.js";
import { onPage, openPreset, stage } from "./walk.js";

/** @type {import("../model/calipers.js").Timed[]} */
const TIMES = [[1, 100, 0, 1], [2, 104, 0, 0], [3, 400, 0, 0], [-7, 110, 0, 1], [9, 900, 0, 1]];

describe("calipers without a page", () => {
  test("a leg snaps to what people measure from before any nearer event", () => {
    assert.equal(snapped(TIMES, 105, 8), 100);
    assert.equal(snapped(TIMES, 397, 8), 400);
    assert.equal(snapped(TIMES, 250, 8), 250);
    assert.equal(snapped(TIMES, 109, 8, true), 110, "in the upper half to events before");
    assert.equal(nextInstant(TIMES, 100, 1), 900);
    assert.equal(nextInstant(TIMES, 900, -1), 100);
    assert.equal(nextInstant(TIMES, 900, 1), undefined);
  });
  test("the interval in milliseconds, a minute and millimetres of paper", () => {
    assert.deepEqual(readings(-800, 25), ["800 ms", "75/min", "20 mm"]);
    assert.deepEqual(readings(40, 50), ["40 ms", "2 mm"]);
  });
  test("marching out counts from both legs and stops where legs would touch", () => {
    const c = { ...NO_CALIPERS, a_ms: 1000, b_ms: 1400 };
    assert.deepEqual(marched(c, 0, 2300, 10), [{ t: 600, n: 1 }, { t: 200, n: 2 }, { t: 1800, n: 1 }, { t: 2200, n: 2 }]);
    assert.deepEqual(marched(c, 0, 2300, 401), []);
    assert.deepEqual(firstPlaces([100, 900, 1700, 2500], 0, 2600), { a_ms: 900, b_ms: 1700 });
  });
});

describe("calipers on the sheet", () => {
  stage();

  test("legs are dragged, snap to beats, march out, are pinned, and ask nothing of the engine", () => onPage(async (page) => {
    await openPreset(page, "normal");
    await page.click("#calipers");
    await settled(page);
    assert.equal(await page.innerText(".caliper-text"), "800 ms · 75/min · 20 mm");
    const asked = await page.evaluate(() => {
      const w = /** @type {any} */ (window);
      w.asked = 0;
      const post = Worker.prototype.postMessage;
      Worker.prototype.postMessage = function (/** @type {any[]} */ ...args) {
        w.asked++;
        return post.apply(this, /** @type {any} */ (args));
      };
      return w.asked;
    });
    assert.equal(asked, 0);
    const knob = await page.locator(".caliper-leg[data-leg=b_ms] .knob").boundingBox();
    assert.ok(knob);
    const x = knob.x + knob.width / 2;
    const y = knob.y + knob.height / 2;
    await page.mouse.move(x, y);
    await page.mouse.down();
    await page.mouse.move(x + 78, y, { steps: 6 }); // 20 mm are 75.6 px: the next beat is in reach
    await page.mouse.up();
    await settled(page);
    assert.equal(await page.innerText(".caliper-text"), "1600 ms · 38/min · 40 mm");
    await page.click("text=March");
    await settled(page);
    assert.ok(Number(await page.getAttribute(".caliper-march", "data-count")) >= 2);
    await page.click("text=Pin");
    await settled(page);
    assert.equal(await page.locator(".caliper-pin").count(), 1);
    assert.equal(await page.evaluate(() => /** @type {any} */ (window).asked), 0);
    await page.keyboard.press("Control+z");
    await settled(page);
    assert.equal(await page.locator(".caliper-pin").count(), 0);
  }));

  test("the keyboard moves legs to the next event or by a millisecond, and says what lies between", () => onPage(async (page) => {
    await openPreset(page, "normal");
    await page.keyboard.press("m");
    await settled(page);
    await page.focus(".caliper-leg[data-leg=b_ms]");
    await page.keyboard.press("Shift+ArrowRight");
    await page.keyboard.press("Shift+ArrowRight");
    await settled(page);
    assert.match(await page.innerText(".caliper-text"), /^802 ms/);
    await page.keyboard.press("ArrowLeft");
    await settled(page);
    assert.match(await page.innerText(".caliper-text"), /^800 ms/);
    assert.match((await page.getAttribute(".caliper-leg[data-leg=b_ms]", "aria-valuetext")) ?? "", / s; 800 ms, 75\/min, 20 mm$/);
    await page.waitForFunction(() => document.querySelector(".calipers [role=status]")?.textContent?.startsWith("800 ms"));
    await page.keyboard.press("Escape");
    await settled(page);
    assert.equal(await page.isHidden(".calipers"), true);
    assert.equal(await page.evaluate(() => document.activeElement?.id), "timeline");
  }));

  test("N and Shift N go from finding to finding, and a press on a flag goes to it", () => onPage(async (page) => {
    await openPreset(page, "pvc-full-pause");
    const where = async () => {
      await settled(page);
      return page.innerText(".account .when");
    };
    await page.keyboard.press("n");
    const first = await where();
    await page.keyboard.press("n");
    await page.keyboard.press("n");
    assert.notEqual(await where(), first);
    assert.match((await page.textContent("#overview [role=status]")) ?? "", /^3 of \d+: /);
    await page.keyboard.press("Shift+N");
    await page.keyboard.press("Shift+N");
    assert.equal(await where(), first);
    await page.click("#deselect");
    await page.click("#overview canvas", { position: { x: await flagX(page), y: 8 } });
    await settled(page);
    assert.equal(await page.isVisible("#deselect"), true);
  }));
});

/** The place of the first flag. @param {import("playwright-core").Page} page */
function flagX(page) {
  return page.evaluate(() => {
    const c = /** @type {HTMLCanvasElement} */ (document.querySelector("#overview canvas"));
    const d = /** @type {CanvasRenderingContext2D} */ (c.getContext("2d")).getImageData(0, 8, c.width, 1).data;
    for (let i = 0; i < d.length; i += 4) if (d[i + 3] > 200) return i / 4 + 3;
    return -1;
  });
}
