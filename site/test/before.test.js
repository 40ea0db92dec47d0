// Before and after: two timelines one above the other, and in what they differ.

import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { settled } from "./host.js";
import { ink, onPage, openPreset, RATE, stage } from "./walk.js";

describe("before and after", () => {
  stage();

  test("a kept strip stays above what another preset shows, with a table of differences", () => onPage(async (page) => {
    await openPreset(page, "normal");
    const alone = (await ink(page)).marks;
    await page.click("#keep-before");
    await settled(page);
    assert.ok((await ink(page)).marks > 1.3 * alone, "both strips are drawn");
    assert.match(await page.innerText(".contrast-sums"), /No event differs/);
    await openPreset(page, "pvc-full-pause");
    assert.match(await page.innerText(".contrast-sums"), /Normal sinus rhythm[\s\S]*Ventricular premature beat/);
    assert.match(await page.innerText('table.contrast tr:has-text("QRS rate")'), /75\/min\s+70\/min\s+↓ 5\/min/);
    assert.match(await page.innerText('table.contrast tr:has-text("premature beat")'), /\+ new/);
    assert.match(await page.innerText('table.contrast tr:has-text("sinus rate")'), /75\/min.* → 70\/min/);
    assert.equal(await page.locator("table.contrast thead th[scope=col]").count(), 4);
    assert.equal(await page.locator("table.contrast tbody tr > :first-child:not(th[scope])").count(), 0, "every row has a head");
  }));

  test("an event of the strip before can be selected, and its account says so", () => onPage(async (page) => {
    await openPreset(page, "pvc-full-pause");
    await page.keyboard.press("k");
    await openPreset(page, "normal");
    const box = await page.locator("#timeline canvas").boundingBox();
    assert.ok(box);
    let title = "";
    for (let y = box.y + 75; y < box.y + box.height / 2 && !title.startsWith("Before"); y += 6) {
      await page.mouse.click(box.x + 92, y);
      await settled(page);
      title = await page.innerText("#account h2");
    }
    assert.match(title, /^Before: /);
    assert.match(await page.innerText(".against"), /before|after/);
    await page.locator(".chain button").last().click();
    await settled(page);
    assert.match(await page.innerText("#account h2"), /^Before: /, "its causes are of the same strip");
  }));

  test("letting go, undo and redo take the strip away and bring it back", () => onPage(async (page) => {
    const alone = (await ink(page)).marks;
    await page.click("#keep-before");
    await settled(page);
    const both = (await ink(page)).marks;
    await page.click("#keep-before");
    await settled(page);
    assert.equal((await ink(page)).marks, alone);
    await page.keyboard.press("Control+z");
    await settled(page);
    assert.equal((await ink(page)).marks, both);
    await page.keyboard.press("Control+z");
    await settled(page);
    assert.equal((await ink(page)).marks, alone);
  }));

  test("the strip before outlives the engine that drew it", () => onPage(async (page) => {
    await page.click("#keep-before");
    await settled(page);
    const both = (await ink(page)).marks;
    // A computation that takes too long is ended with its worker when a newer one waits.
    await page.fill('[data-field="span_ms"]', "80000000");
    await page.waitForTimeout(100);
    await page.fill('[data-field="span_ms"]', "");
    await settled(page);
    assert.equal((await ink(page)).marks, both);
    await page.fill(RATE, "90");
    await settled(page);
    assert.match(await page.innerText('table.contrast tr:has-text("QRS rate")'), /75\/min\s+90\/min/);
  }));
});
