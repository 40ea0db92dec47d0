// The page in a real browser, as a person and as a keyboard use it.

import assert from "node:assert/strict";
import { mkdirSync } from "node:fs";
import { join } from "node:path";
import { after, before, describe, test } from "node:test";
import { openBrowser, openPage, ROOT, serveSite, settled } from "./host.js";

/** @typedef {import("playwright-core").Page} Page */

const AH = '[data-field="heart.av_node.fast.ah_ms"]';
const RATE = '[data-field="heart.sinus.rate_bpm"]';
const SHOTS = join(ROOT, "site", "test", "shots");

/** @type {Awaited<ReturnType<typeof serveSite>>} */
let site;
/** @type {Awaited<ReturnType<typeof openBrowser>>} */
let browser;

before(async () => {
  mkdirSync(SHOTS, { recursive: true });
  site = await serveSite();
  browser = await openBrowser();
});
after(async () => {
  await browser?.stop();
  site?.stop();
});

/**
 * Runs a walk on a fresh page and demands that the console stayed empty and that
 * nothing was asked of another place.
 * @param {(page: Page) => Promise<void>} walk
 * @param {{width: number, height: number}} [size]
 */
async function onPage(walk, size) {
  const { page, faults } = await openPage(browser.context, site.url, size);
  try {
    await settled(page);
    await walk(page);
    assert.deepEqual(faults, []);
  } finally {
    await page.close();
  }
}

/** @param {Page} page @param {string} name */
async function openPreset(page, name) {
  await page.click("#presets");
  await page.click(`[data-preset="${name}"]`);
  return settled(page);
}

/**
 * How much of the timeline's canvas is not paper, in thousandths, and how many
 * colours it has.
 * @param {Page} page
 */
const ink = (page) => page.evaluate(() => {
  const canvas = /** @type {HTMLCanvasElement} */ (document.querySelector("#timeline canvas"));
  const copy = new OffscreenCanvas(canvas.width, canvas.height);
  const g = /** @type {OffscreenCanvasRenderingContext2D} */ (copy.getContext("2d", { willReadFrequently: true }));
  g.drawImage(canvas, 0, 0);
  const d = new Uint32Array(g.getImageData(0, 0, canvas.width, canvas.height).data.buffer);
  const colours = new Set();
  let other = 0;
  for (const c of d) {
    if (c !== d[0]) other++;
    if (colours.size < 50) colours.add(c);
  }
  return { share: (1000 * other) / d.length, colours: colours.size, marks: Number(canvas.dataset.marks) };
});

/**
 * Presses the mark of the first blocked impulse that is drawn; its place comes
 * from the sheet's own listing of what is selected by the keys.
 * @param {Page} page @param {string} words that the account's title must have
 */
async function walkTo(page, words) {
  await page.focus("#timeline");
  for (let i = 0; i < 80; i++) {
    await page.keyboard.press(".");
    await settled(page);
    if ((await page.textContent("#account h2"))?.toLowerCase().includes(words)) return;
  }
  assert.fail(`no event whose account speaks of ${words}`);
}

describe("the page", () => {
  test("opens with a drawn, computed timeline and the caution", () => onPage(async (page) => {
    const drawn = await ink(page);
    assert.ok(drawn.share > 20 && drawn.colours > 8, JSON.stringify(drawn));
    assert.ok(drawn.marks > 100, `${drawn.marks} marks`);
    assert.match(await page.innerText("#statement"), /sinus/i);
    const overview = await page.evaluate(() => {
      const from = /** @type {HTMLCanvasElement} */ (document.querySelector("#overview canvas"));
      const g = /** @type {OffscreenCanvasRenderingContext2D} */ (new OffscreenCanvas(from.width, from.height).getContext("2d"));
      g.drawImage(from, 0, 0);
      const d = g.getImageData(0, 0, from.width, from.height).data;
      const seen = new Set();
      for (let i = 0; i < d.length; i += 4) if (d[i + 3] === 255) seen.add(`${d[i]},${d[i + 1]},${d[i + 2]}`);
      return [...seen];
    });
    for (const [what, colour] of [["atria", "11,107,114"], ["ventricles", "30,42,48"], ["the part shown", "233,239,239"]]) {
      assert.ok(overview.includes(colour), `${what} are missing from the overview`);
    }
    assert.match(await page.innerText("footer"), /^Planning and teaching aid\. .* licensed clinician\.$/);
  }));

  test("draws every preset, each another timeline", () => onPage(async (page) => {
    await page.click("#presets");
    const names = await page.$$eval("[data-preset]", (all) => all.map((b) => b.getAttribute("data-preset") ?? ""));
    await page.keyboard.press("Escape");
    assert.ok(names.length >= 20, `${names.length} presets`);
    const seen = new Map();
    for (const name of names) {
      const print = await openPreset(page, name);
      assert.equal(await page.isHidden("#fault"), true, name);
      assert.equal(await page.locator(".row.wrong").count(), 0, name);
      assert.ok((await page.innerText("#statement")).length > 10, name);
      assert.ok((await ink(page)).share > 10, name);
      assert.equal(seen.get(print), undefined, `${name} is the same timeline as ${seen.get(print)}`);
      seen.set(print, name);
    }
  }));

  test("a typed value changes the timeline, its reset and undo bring it back", () => onPage(async (page) => {
    const first = await settled(page);
    await page.fill(AH, "140");
    const second = await settled(page);
    assert.notEqual(second, first);
    assert.match(await page.innerText('[data-path="heart.av_node.fast.ah_ms"] .name'), /AH/);
    assert.match(await page.innerText(".only"), /\(1\)/);
    await page.click('[data-path="heart.av_node.fast.ah_ms"] .reset');
    assert.equal(await settled(page), first);
    await page.keyboard.press("Control+z");
    assert.equal(await settled(page), second);
  }));

  test("a wrong value is told at its field in the engine's words, and the timeline stays", () => onPage(async (page) => {
    const first = await settled(page);
    await page.fill(AH, "5000");
    await page.waitForSelector(".row.wrong");
    assert.match(await page.innerText('[data-path="heart.av_node.fast.ah_ms"] .row-fault'), /heart\.av_node\.fast\.ah_ms: 5000; allowed: a number from \d+ to \d+ ms/);
    await page.fill(RATE, "ninety");
    await page.waitForFunction(() => document.querySelectorAll(".row.wrong").length === 2);
    assert.equal(await settled(page), first);
    assert.match(await page.innerText(".warnings"), /2 values are wrong/);
    assert.ok((await ink(page)).share > 20);
    await page.click("#show-wrong");
    assert.equal(await page.evaluate(() => document.activeElement?.getAttribute("data-field")), "heart.sinus.rate_bpm");
    await page.fill(AH, "");
    await page.fill(RATE, "");
    await page.waitForFunction(() => document.querySelectorAll(".row.wrong").length === 0);
    assert.equal(await settled(page), first);
  }));

  test("a switch takes conduction away and gives it back", () => onPage(async (page) => {
    const first = await settled(page);
    await page.getByLabel("no conduction to the ventricles").check();
    const second = await settled(page);
    assert.notEqual(second, first);
    assert.equal(await page.isDisabled(AH), true);
    await page.getByLabel("no conduction to the ventricles").uncheck();
    assert.equal(await settled(page), first);
  }));

  test("a premature beat can be added, moved and removed, a focus as well", () => onPage(async (page) => {
    const first = await settled(page);
    await page.click("text=+ premature beat");
    const second = await settled(page);
    assert.notEqual(second, first);
    await page.fill('[data-field="interventions[0].at_ms"]', "2510");
    const third = await settled(page);
    assert.notEqual(third, second);
    await page.selectOption('[data-field="interventions[0].site"]', "rv_apex");
    assert.notEqual(await settled(page), third);
    await page.click(".item .remove");
    assert.equal(await settled(page), first);
    await page.click("text=+ junctional focus");
    await page.fill('[data-field="heart.foci[0].rate_bpm"]', "110");
    assert.notEqual(await settled(page), first);
  }));

  test("trains and changes have their fields", () => onPage(async (page) => {
    const first = await settled(page);
    await page.click("text=+ train");
    await page.fill('[data-field="interventions[0].extras_ms"]', "300, 280");
    const second = await settled(page);
    assert.notEqual(second, first);
    await page.fill('[data-field="interventions[0].extras_ms"]', "300, x");
    await page.waitForSelector(".row.wrong");
    await page.fill('[data-field="interventions[0].extras_ms"]', "");
    await page.click("text=+ change");
    await page.selectOption('[data-field="interventions[1].field"]', "heart.his_purkinje.hv_ms");
    await page.fill('[data-field="interventions[1].to"]', "90");
    assert.notEqual(await settled(page), second);
    assert.equal(await page.locator(".row.wrong").count(), 0);
  }));

  test("search and the filter leave what was asked for", () => onPage(async (page) => {
    await page.fill("#search", "wenckebach");
    const names = await page.$$eval(".settings-body .row:not([hidden]) .name", (all) => all.map((n) => n.textContent ?? ""));
    assert.ok(names.length > 0 && names.every((n) => /wenckebach/i.test(n)), names.join());
    await page.fill("#search", "");
    await page.fill(RATE, "91");
    await page.check("#changed-only");
    await settled(page);
    assert.deepEqual(await page.$$eval(".settings-body .row:not([hidden])", (all) => all.map((n) => n.getAttribute("data-path"))), ["heart.sinus.rate_bpm"]);
  }));

  test("leads, gain, speed and ladder change the drawing and not the timeline", () => onPage(async (page) => {
    const first = await settled(page);
    const marks = async () => {
      await settled(page);
      return (await ink(page)).marks;
    };
    const before = await marks();
    await page.click(".pop summary");
    await page.click("text=all twelve");
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
    const said = await page.innerText(".sentences");
    assert.ok(said.length > 30 && /\d/.test(said), said);
    const steps = page.locator(".chain button");
    const many = await steps.count();
    assert.ok(many >= 2, `${many} steps`);
    await steps.last().click();
    await settled(page);
    assert.match((await page.innerText("#account h2")) + (await page.innerText(".sentences")), /sinus/i);
    await page.click("#deselect");
    assert.equal(await page.innerText("#account h2"), "Measured");
  }));

  test("a press on the drawing selects, a drag pans, a wheel with Control zooms", () => onPage(async (page) => {
    const box = await page.locator("#timeline canvas").boundingBox();
    assert.ok(box);
    const y = box.y + box.height * 0.75;
    for (let x = box.x + 100; x < box.x + 260 && (await page.isHidden("#deselect")); x += 4) await page.mouse.click(x, y);
    await settled(page);
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
    const canvas = page.locator("#timeline canvas");
    const box = await canvas.boundingBox();
    assert.ok(box);
    // The ring is the only thing in the device's colour; it stands in the ladder.
    const ring = await page.evaluate(() => {
      const from = /** @type {HTMLCanvasElement} */ (document.querySelector("#timeline canvas"));
      const copy = new OffscreenCanvas(from.width, from.height);
      const g = /** @type {OffscreenCanvasRenderingContext2D} */ (copy.getContext("2d", { willReadFrequently: true }));
      g.drawImage(from, 0, 0);
      const d = g.getImageData(0, 0, copy.width, copy.height).data;
      for (let i = 0; i < d.length; i += 4) {
        if (d[i] === 0x34 && d[i + 1] === 0x47 && d[i + 2] === 0xb5) return { x: (i / 4) % copy.width, y: Math.floor(i / 4 / copy.width) };
      }
      return null;
    });
    assert.ok(ring, "no ring was found");
    const x = box.x + ring.x;
    const y = box.y + ring.y + 2;
    await page.mouse.move(x, y);
    assert.equal(await page.locator(".over-handle").count(), 1);
    await page.mouse.down();
    await page.mouse.move(x - 60, y, { steps: 6 });
    await settled(page);
    assert.match(await page.innerText(".hair-time"), /^at \d+ ms$/);
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

  test("a failure of the engine is told, the values stay and it works again", async () => {
    const { page } = await openPage(browser.context, site.url);
    const first = await settled(page);
    await page.route("**/engine/worker.js", async (route) => {
      const was = await route.fetch();
      await route.fulfill({ response: was, body: `${await was.text()}\nready.then(() => { const real = scope.call; scope.call = (op, json) => op === "compute" && json.includes("123") ? { fault: "heart: a bug of the test" } : real(op, json); });` });
    });
    await page.reload();
    await settled(page);
    await page.fill(AH, "123");
    await page.waitForSelector("#fault:not([hidden])");
    assert.match(await page.innerText("#fault"), /heart: a bug of the test/);
    assert.equal(await page.inputValue(AH), "123");
    assert.equal(await page.evaluate(() => document.body.dataset.fingerprint), first);
    assert.ok((await ink(page)).share > 20);
    await page.fill(AH, "120");
    await page.waitForSelector("#fault", { state: "hidden" });
    assert.notEqual(await settled(page), first);
    await page.close();
  });

  test("a newer request takes the place of those that wait", () => onPage(async (page) => {
    await page.evaluate(async (selector) => {
      const input = /** @type {HTMLInputElement} */ (document.querySelector(selector));
      for (let v = 60; v <= 100; v++) {
        input.value = String(v);
        input.dispatchEvent(new Event("input"));
        if (v % 5 === 0) await new Promise(requestAnimationFrame);
      }
    }, RATE);
    const last = await settled(page);
    await page.fill(RATE, "99");
    await settled(page);
    await page.fill(RATE, "100");
    assert.equal(await settled(page), last);
    assert.match(await page.innerText("#statement"), /100\/min/);
  }));

  test("on a tablet settings and account are drawers", () => onPage(async (page) => {
    assert.equal(await page.isVisible("#search"), false);
    await page.click("#open-settings");
    await page.waitForSelector("#search", { state: "visible" });
    const first = await settled(page);
    await page.fill(RATE, "88");
    assert.notEqual(await settled(page), first);
    await page.keyboard.press("Escape");
    await page.keyboard.press("Escape");
    await page.waitForSelector("#search", { state: "hidden" });
    await page.click("#open-account");
    await page.waitForSelector("#account h2", { state: "visible" });
  }, { width: 820, height: 1180 }));

  for (const [name, size] of /** @type {[string, {width: number, height: number}][]} */ ([["desk", { width: 1280, height: 800 }], ["tablet", { width: 820, height: 1180 }]])) {
    test(`nothing sticks out at ${size.width} by ${size.height}`, () => onPage(async (page) => {
      for (const preset of ["normal", "wenckebach-4-3", "pvc-full-pause"]) {
        await openPreset(page, preset);
        const over = await page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth);
        assert.equal(over, 0);
        await page.screenshot({ path: join(SHOTS, `${name}-${preset}.png`) });
      }
    }, size));
  }
});
