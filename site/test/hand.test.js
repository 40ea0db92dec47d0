// The hand and the keys on the timeline, and what they bring up.

import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { settled } from "./host.js";
import { ink, onPage, openPreset, ringAt, stage, walkTo } from "./walk.js";

describe("the hand on the timeline", () => {
  stage();

  test("leads, gain, speed and ladder change the drawing and not the timeline", () => onPage(async (page) => {
    const first = await settled(page);
    const marks = async () => {
      await settled(page);
      return (await ink(page)).marks;
    };
    const before = await marks();
    await page.click(".toolbar .pop summary");
    await page.click('.toolbar .choices button:text-is("all twelve")');
    assert.ok((await marks()) > before);
    await page.click('.group >> text="full"');
    await page.click('[title="50 millimetres a second"]');
    await page.click('[title="20 millimetres a millivolt"]');
    await marks();
    assert.equal(await page.getAttribute('[title="50 millimetres a second"]', "aria-pressed"), "true");
    assert.equal(await settled(page), first);
  }));

  test("selecting an event shows its account, and the chain walks back to a focus", () => onPage(async (page) => {
    await openPreset(page, "wenckebach-4-3");
    await walkTo(page, "block");
    const said = await page.innerText(".account-body .sentences");
    assert.ok(said.length > 30 && /\d/.test(said), said);
    const steps = page.locator(".chain button");
    const many = await steps.count();
    assert.ok(many >= 2, `${many} steps`);
    await steps.last().click();
    await settled(page);
    assert.match((await page.innerText("#account h2")) + (await page.innerText(".account-body .sentences")), /sinus/i);
    await page.click("#deselect");
    await settled(page);
    assert.equal(await page.innerText("#account h2"), "Measured");
  }));

  test("a press on the drawing selects, a drag pans, a wheel with Control zooms", () => onPage(async (page) => {
    const box = await page.locator("#timeline canvas").boundingBox();
    assert.ok(box);
    const y = box.y + box.height * 0.75;
    for (let x = box.x + 100; x < box.x + 260 && (await page.isHidden("#deselect")); x += 4) {
      await page.mouse.click(x, y);
      await settled(page);
    }
    assert.equal(await page.isVisible("#deselect"), true);
    const shown = () => page.getAttribute("#overview canvas", "aria-valuetext");
    const before = await shown();
    await page.mouse.move(box.x + 400, y);
    await page.mouse.down();
    await page.mouse.move(box.x + 250, y, { steps: 5 });
    await page.mouse.up();
    await settled(page);
    const dragged = await shown();
    assert.notEqual(dragged, before);
    assert.equal(await page.isVisible("#deselect"), true, "a drag does not take the selection away");
    await page.keyboard.down("Control");
    await page.mouse.wheel(0, -300);
    await page.keyboard.up("Control");
    await settled(page);
    assert.notEqual(await shown(), dragged);
  }));

  test("a stimulus is moved by its ring, and Escape or undo puts it back", () => onPage(async (page) => {
    await page.click("text=+ premature beat");
    const first = await settled(page);
    const at = () => page.inputValue('[data-field="interventions[0].at_ms"]');
    const began = await at();
    const { x, y } = await ringAt(page);
    await page.mouse.move(x, y);
    assert.equal(await page.locator(".over-handle").count(), 1);
    await page.mouse.down();
    await page.mouse.move(x - 60, y, { steps: 6 });
    await settled(page);
    assert.match(await page.innerText(".tip"), /^stimulus at \d+ ms, \d+ ms after the last beat there$/);
    await page.mouse.up();
    assert.notEqual(await settled(page), first);
    assert.ok(Number(await at()) < Number(began));
    await page.keyboard.press("Control+z");
    assert.equal(await settled(page), first);
    assert.equal(await at(), began);
  }));

  test("the hair line follows the pointer and snaps to an event", () => onPage(async (page) => {
    const box = await page.locator("#timeline canvas").boundingBox();
    assert.ok(box);
    await page.mouse.move(box.x + 300, box.y + 100);
    assert.equal(await page.isVisible(".hair"), true);
    assert.match(await page.innerText(".hair-time"), /^\d+\.\d{3} s$/);
    let snapped = false;
    for (let x = box.x + 100; x < box.x + 250 && !snapped; x += 3) {
      await page.mouse.move(x, box.y + 300);
      snapped = (await page.locator(".hair.snapped").count()) > 0;
    }
    assert.equal(snapped, true);
  }));

  test("the keyboard alone does the work", () => onPage(async (page) => {
    await page.keyboard.press("p");
    await page.keyboard.type("4:3");
    await page.keyboard.press("Tab");
    await page.keyboard.press("Enter");
    const first = await settled(page);
    assert.match(await page.innerText("#head h1"), /4:3/);
    await page.keyboard.press("/");
    await page.keyboard.type("sinus rate");
    await page.keyboard.press("Tab");
    await page.keyboard.press("Tab");
    for (let i = 0; i < 8 && (await page.evaluate(() => document.activeElement?.getAttribute("data-field"))) !== "heart.sinus.rate_bpm"; i++) await page.keyboard.press("Tab");
    await page.keyboard.press("ArrowDown");
    const second = await settled(page);
    assert.notEqual(second, first);
    await page.keyboard.press("Escape");
    assert.equal(await settled(page), first);
    await page.focus("#timeline");
    await page.keyboard.press(".");
    await settled(page);
    assert.equal(await page.isVisible("#deselect"), true);
    await page.keyboard.press("Escape");
    await settled(page);
    assert.equal(await page.isVisible("#deselect"), false);
    await page.keyboard.press("?");
    assert.match(await page.innerText("dialog[open]"), /previous and next event/);
    await page.keyboard.press("Escape");
  }));

  test("the listing tells the same events as text", () => onPage(async (page) => {
    await openPreset(page, "wenckebach-4-3");
    await page.click("#tab-listing");
    await page.waitForSelector(".lines li");
    const lines = await page.locator(".lines li").count();
    assert.ok(lines > 20, `${lines} lines`);
    await page.locator(".lines button").nth(5).click();
    await settled(page);
    assert.equal(await page.isVisible("#deselect"), true);
    assert.equal(await page.locator(".lines [aria-current]").count(), 1);
  }));

  test("a clause of the statement lights its events", () => onPage(async (page) => {
    await openPreset(page, "mobitz-2");
    const before = await page.evaluate(() => /** @type {HTMLCanvasElement} */ (document.querySelector("#timeline canvas")).toDataURL());
    await page.hover(".clause[tabindex] >> nth=1");
    await settled(page);
    const lit = await page.evaluate(() => /** @type {HTMLCanvasElement} */ (document.querySelector("#timeline canvas")).toDataURL());
    assert.notEqual(lit, before);
  }));
});
