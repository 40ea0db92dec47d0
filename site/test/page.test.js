// The page in a real browser: what it shows, its settings, its failures.

import assert from "node:assert/strict";
import { mkdirSync } from "node:fs";
import { join } from "node:path";
import { describe, test } from "node:test";
import { ROOT, settled } from "./host.js";
import { AH, barePage, ink, onPage, openPreset, RATE, stage } from "./walk.js";

const SHOTS = join(ROOT, "site", "test", "shots");
mkdirSync(SHOTS, { recursive: true });

describe("the page", () => {
  stage();

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

  test("a failure of the engine is told, the values stay and it works again", async () => {
    const { page } = await barePage();
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
