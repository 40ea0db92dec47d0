// What is kept: the working copy over a reload, plans by title, files and links.

import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { describe, test } from "node:test";
import { encodeLink } from "../model/link.js";
import { openPage, settled } from "./host.js";
import { AH, onPage, openPreset, person, RATE, stage } from "./walk.js";

/** @typedef {import("playwright-core").Page} Page */

/** @param {Page} page @param {string} name */
const notice = (page, name) => page.locator(`[data-notice="${name}"]`);

/** Waits until what was typed last has been written. @param {Page} page */
const written = (page) => page.waitForTimeout(450);

/** Everything that the browser keeps for the page. @param {Page} page */
const keptTexts = (page) => page.evaluate(() => Object.fromEntries(Object.entries(localStorage)));

/** @param {Page} page @param {string} name @param {string | Buffer} text */
const openFile = (page, name, text) => page.setInputFiles("#open-file-input", { name, mimeType: "application/json", buffer: Buffer.from(text) });

/**
 * Runs a walk that needs a browser of its own, for more pages than one.
 * @param {(context: import("playwright-core").BrowserContext, url: string) => Promise<void>} walk
 */
async function withPerson(walk) {
  const { context, url } = await person({ permissions: ["clipboard-read", "clipboard-write"] });
  try {
    await walk(context, url);
  } finally {
    await context.close();
  }
}

describe("the working copy", () => {
  stage();

  test("the plan is there after a reload, right values and wrong ones", () => onPage(async (page) => {
    await page.fill(AH, "140");
    await page.fill(RATE, "ninety");
    await written(page);
    await page.reload();
    await page.waitForSelector(".row.wrong");
    assert.equal(await page.inputValue(AH), "140");
    assert.equal(await page.inputValue(RATE), "ninety");
  }));

  test("what was typed a moment before a reload is there too", () => onPage(async (page) => {
    await page.fill(AH, "141");
    await page.reload();
    await settled(page);
    assert.equal(await page.inputValue(AH), "141");
  }));

  test("leads, gain and ladder chosen by hand are there after a reload", () => onPage(async (page) => {
    await page.click('.toolbar .pop summary');
    await page.click('.toolbar .choices button:text-is("II")');
    await page.click('[title="20 millimetres a millivolt"]');
    await settled(page);
    await page.reload();
    await settled(page);
    assert.equal(await page.getAttribute('[title="20 millimetres a millivolt"]', "aria-pressed"), "true");
    assert.equal(await page.innerText(".toolbar .pop .chosen"), "II");
  }));

  test("a closed tab's plan comes back; two living tabs have one each", () => withPerson(async (context, url) => {
    const a = (await openPage(context, url)).page;
    await settled(a);
    await a.fill(AH, "131");
    await written(a);
    const b = (await openPage(context, url)).page;
    await settled(b);
    assert.equal(await b.inputValue(AH), "80", "the second tab begins anew");
    await b.fill(AH, "132");
    await written(b);
    await a.reload();
    await settled(a);
    assert.equal(await a.inputValue(AH), "131");
    await a.close();
    await b.close();
    const c = (await openPage(context, url)).page;
    await settled(c);
    assert.equal(await c.inputValue(AH), "132", "the newest that no tab holds");
    await c.keyboard.press("Shift+K");
    await c.waitForSelector("dialog.kept[open] .kept-list");
    assert.match(await c.innerText("dialog.kept"), /Left open in a tab that was closed/);
    await c.click("dialog.kept .kept-open");
    await settled(c);
    assert.equal(await c.inputValue(AH), "131", "and the other is not lost");
  }));

  test("a damaged copy is told, kept as text, and the page begins safely", () => withPerson(async (context, url) => {
    const { page } = await openPage(context, url);
    await settled(page);
    await page.fill(AH, "131");
    await written(page);
    await page.evaluate(() => {
      window.addEventListener("pagehide", () => Object.keys(localStorage).filter((k) => k.startsWith("escapement.working.")).forEach((k) => localStorage.setItem(k, '{"plan": damaged')));
    });
    await page.reload();
    await settled(page);
    assert.equal(await page.inputValue(AH), "80");
    assert.match(await notice(page, "unreadable").innerText(), /cannot be read; the page begins with a healthy adult/);
    const saving = page.waitForEvent("download");
    await page.getByRole("button", { name: "Save its text" }).click();
    assert.equal(readFileSync(await (await saving).path(), "utf8"), '{"plan": damaged');
    await page.fill(AH, "99");
    await written(page);
    assert.ok(Object.values(await keptTexts(page)).includes('{"plan": damaged'), "it was written over");
  }));

  for (const [name, spoil, want] of /** @type {[string, () => void, RegExp][]} */ ([
    ["full", () => { Storage.prototype.setItem = () => { throw new DOMException("full", "QuotaExceededError"); }; }, /storage for the page is full: the plan stays on the page/],
    ["blocked", () => { for (const s of ["localStorage", "sessionStorage"]) Object.defineProperty(window, s, { get() { throw new DOMException("no", "SecurityError"); } }); }, /lets the page keep nothing: the plan stays on the page/],
  ])) {
    test(`a storage that is ${name} is told once something could be lost, and nothing is`, () => withPerson(async (context, url) => {
      await context.addInitScript(spoil);
      const { page, faults } = await openPage(context, url);
      const first = await settled(page);
      assert.equal(await page.locator(".notice").count(), 0, "not before");
      await page.fill(AH, "140");
      await notice(page, "storage").waitFor();
      assert.match(await notice(page, "storage").innerText(), want);
      assert.notEqual(await settled(page), first);
      await page.keyboard.press("Control+s");
      await page.waitForSelector("dialog.kept[open]");
      await page.click("#keep-now");
      assert.match(await page.innerText(".kept-said"), name === "full" ? /full: nothing was kept/ : /save the plan as a file/);
      await page.keyboard.press("Escape");
      const saving = page.waitForEvent("download");
      await notice(page, "storage").getByRole("button", { name: "Save file" }).click();
      assert.equal(JSON.parse(readFileSync(await (await saving).path(), "utf8")).heart.av_node.fast.ah_ms, 140);
      assert.deepEqual(faults, []);
    }));
  }
});

describe("kept plans", () => {
  stage();

  /** @param {Page} page @param {string} title */
  async function keepAs(page, title) {
    await page.click("summary:text('File')");
    await page.click("#file-kept");
    await page.fill("#kept-title", title);
    await page.click("#keep-now");
  }

  test("several are kept by title, opened, renamed, deleted, and a deletion is taken back", () => onPage(async (page) => {
    await page.fill(AH, "131");
    await keepAs(page, "First");
    assert.match(await page.innerText(".kept-said"), /“First” is kept/);
    await page.keyboard.press("Escape");
    await page.fill(AH, "132");
    await keepAs(page, "Second");
    assert.deepEqual(await page.locator(".kept-list strong").allInnerTexts(), ["Second", "First"]);
    await page.click('[data-kept]:has-text("First") .kept-open');
    await settled(page);
    assert.equal(await page.inputValue(AH), "131");
    assert.match(await page.innerText("#presets"), /First.*kept;/);
    await page.keyboard.press("Control+z");
    await settled(page);
    assert.equal(await page.inputValue(AH), "132", "undo brings back the plan before");

    await page.focus("#timeline");
    await page.keyboard.press("Shift+K");
    await page.click('[data-kept]:has-text("First") .kept-rename');
    await page.keyboard.type("Third");
    await page.keyboard.press("Enter");
    await page.waitForSelector('[data-kept]:has-text("Third")');
    await page.click('[data-kept]:has-text("Third") .kept-delete');
    await page.waitForSelector('[data-kept]:has-text("Third")', { state: "detached" });
    await page.keyboard.press("Enter"); // the focus is on Undo
    await page.waitForSelector('[data-kept]:has-text("Third")');
    await page.keyboard.press("Escape");
    await page.reload();
    await settled(page);
    await page.keyboard.press("Shift+K");
    await page.waitForSelector(".kept-list");
    assert.deepEqual((await page.locator(".kept-list strong").allInnerTexts()).sort(), ["Second", "Third"]);
  }));

  test("a title that is taken is not written over unasked", () => onPage(async (page) => {
    await page.fill(AH, "131");
    await keepAs(page, "Mine");
    await page.keyboard.press("Escape");
    await openPreset(page, "normal");
    await keepAs(page, "Mine");
    assert.match(await page.innerText(".asked"), /“Mine” is kept already/);
    await page.click("#keep-both");
    await page.waitForFunction(() => document.querySelectorAll(".kept-list li").length === 2);
  }));

  test("two tabs do not write over each other's kept plan in silence", () => withPerson(async (context, url) => {
    const a = (await openPage(context, url)).page;
    await settled(a);
    await a.fill(AH, "131");
    await keepAs(a, "Shared");
    await a.keyboard.press("Escape");
    const b = (await openPage(context, url)).page;
    await settled(b);
    await b.keyboard.press("Shift+K");
    await b.click('[data-kept]:has-text("Shared") .kept-open');
    await settled(b);
    await b.fill(AH, "150");
    await b.keyboard.press("Control+s");
    await notice(b, "kept").waitFor();
    await a.fill(AH, "160");
    await a.keyboard.press("Control+s");
    await a.waitForSelector("#keep-both");
    assert.match(await a.innerText(".asked"), /was kept anew elsewhere/);
    const stored = Object.entries(await keptTexts(a)).filter(([k]) => k.startsWith("escapement.kept.")).map(([, v]) => JSON.parse(v).plan.heart.av_node.fast.ah_ms);
    assert.deepEqual(stored, [150]);
    await a.click("#keep-replace");
    await a.waitForFunction(() => /is kept/.test(document.querySelector(".kept-said")?.textContent ?? ""));
    assert.ok(Object.values(await keptTexts(a)).some((v) => v.includes('"ah_ms":160')));
  }));

  test("one that cannot be read is listed with its text, the others stay", () => onPage(async (page) => {
    await keepAs(page, "Good");
    await page.evaluate(() => localStorage.setItem("escapement.kept.bad", "\u0000nonsense"));
    await page.keyboard.press("Escape");
    await page.keyboard.press("Shift+K");
    await page.waitForSelector(".kept-list .broken");
    assert.match(await page.innerText(".broken"), /Cannot be read/);
    const saving = page.waitForEvent("download");
    await page.click('.broken button:text("Save its text")');
    assert.equal(readFileSync(await (await saving).path(), "utf8"), "\u0000nonsense");
    assert.equal(await page.locator(".kept-list li").count(), 2);
  }));
});

describe("files and links", () => {
  stage();

  test("a plan goes into a file and comes back from it", () => onPage(async (page) => {
    await openPreset(page, "wenckebach-4-3");
    await page.fill(RATE, "101");
    const print = await settled(page);
    const saving = page.waitForEvent("download");
    await page.focus("#timeline");
    await page.keyboard.press("s");
    const file = await saving;
    assert.match(file.suggestedFilename(), /^[a-z0-9-]+\.json$/);
    const text = readFileSync(await file.path(), "utf8");
    await page.click("summary:has-text('File')");
    await page.click("#file-new");
    assert.notEqual(await settled(page), print);
    await openFile(page, "mine.json", text);
    assert.equal(await settled(page), print);
    await page.keyboard.press("Control+z");
    assert.notEqual(await settled(page), print);
  }));

  test("a file with errors opens with each told at its field, and none is lost", () => onPage(async (page) => {
    await openFile(page, "odd.json", '{"format":"escapement-plan/1","title":"Odd","heart":{"sinus":{"rate_bpm":7000,"rate_bmp":3},"foci":"none","av_node":5},"pacemaker":[1],"interventions":[7,{"at_ms":1e999,"do":"dance"}]}');
    await page.waitForSelector(".row.wrong");
    const said = await page.innerText("#settings");
    for (const want of [/heart\.sinus\.rate_bpm: 7000/, /rate_bmp: a field that is not known[\s\S]*did you mean "rate_bpm"/, /heart\.foci: "none"; allowed: a list/, /heart\.av_node: 5; allowed: an object/, /interventions\[0\]: 7; allowed: an object/]) assert.match(said, want);
    assert.match(await notice(page, "open").innerText(), /odd\.json was opened; some of its values are wrong .*interventions\[1\]\.at_ms holds a number larger than can be kept/);
    const saving = page.waitForEvent("download");
    await page.focus("#timeline");
    await page.keyboard.press("s");
    assert.match(readFileSync(await (await saving).path(), "utf8"), /"rate_bmp": 3/);
    await page.fill(RATE, "70");
    await page.waitForFunction(() => !document.querySelector('[data-path="heart.sinus.rate_bpm"].wrong'));
  }));

  for (const [name, file, want] of /** @type {[string, string | Buffer, RegExp][]} */ ([
    ["picture.png", Buffer.from([0x89, 0x50, 0xff, 0xfe]), /picture\.png was not opened\. It cannot be read as UTF-8 text/],
    ["half.json", '{"format":"escapement-plan/1",', /half\.json was not opened\. It is not JSON/],
    ["other.json", '{"format":"something/2"}', /format is "something\/2"; allowed: "escapement-plan\/1"/],
    ["huge.json", Buffer.alloc((4 << 20) + 1, 32), /It has 4194305 bytes; allowed: up to 4194304/],
  ])) {
    test(`${name}: a file that is no plan is refused in words and the page stays`, () => onPage(async (page) => {
      await page.fill(AH, "140");
      const print = await settled(page);
      await openFile(page, name, file);
      await notice(page, "open").waitFor();
      assert.match(await notice(page, "open").innerText(), want);
      assert.equal(await settled(page), print);
    }));
  }

  test("a file can be dropped on the page", () => onPage(async (page) => {
    const print = await settled(page);
    const transfer = await page.evaluateHandle(() => {
      const t = new DataTransfer();
      t.items.add(new File(['{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":99}}}'], "dropped.json"));
      return t;
    });
    await page.dispatchEvent("#account", "dragenter", { dataTransfer: transfer });
    await page.waitForSelector(".drop:not([hidden])");
    await page.dispatchEvent("#account", "drop", { dataTransfer: transfer });
    await page.waitForSelector(".drop", { state: "hidden" });
    await page.waitForFunction((was) => document.body.dataset.fingerprint !== was, print);
    assert.equal(await page.inputValue(RATE), "99");
  }));

  test("a copied link opens the same plan elsewhere, and its changes survive a reload", () => withPerson(async (context, url) => {
    const { page, faults } = await openPage(context, url);
    await settled(page);
    await openPreset(page, "wenckebach-4-3");
    await page.fill(RATE, "101");
    const print = await settled(page);
    await page.focus("#timeline");
    await page.keyboard.press("l");
    await notice(page, "link").waitFor();
    const link = await page.evaluate(() => navigator.clipboard.readText());
    assert.ok(link.startsWith(`${url}#plan=`));
    assert.match(await notice(page, "link").innerText(), new RegExp(`${link.length} letters`));
    const other = await openPage(context, link);
    await other.page.waitForFunction((want) => document.body.dataset.fingerprint === want, print);
    await other.page.reload();
    await other.page.waitForFunction((want) => document.body.dataset.fingerprint === want, print);
    await other.page.fill(RATE, "88");
    await settled(other.page);
    assert.equal(await other.page.evaluate(() => location.hash), "");
    await written(other.page);
    await other.page.reload();
    await settled(other.page);
    assert.equal(await other.page.inputValue(RATE), "88");
    assert.deepEqual([...faults, ...other.faults], []);
  }));

  test("a link followed on the open page is one step of undo", () => onPage(async (page) => {
    await page.fill(AH, "140");
    const print = await settled(page);
    const link = await encodeLink({ format: "escapement-plan/1", heart: { sinus: { rate_bpm: 55 } } });
    await page.evaluate((l) => { location.hash = l; }, link);
    await page.waitForFunction((was) => document.body.dataset.fingerprint !== was, print);
    assert.equal(await page.inputValue(RATE), "55");
    await page.keyboard.press("Control+z");
    assert.equal(await settled(page), print);
  }));

  for (const [name, hash, want] of [
    ["cut off", "#plan=eNqrVkrLL8pNLFGyUkotTk4sSM1NzSvRLchJzNM3VKoFAJ", /cut off or changed/],
    ["with odd letters", "#plan=%3Cscript%3E", /"%" at place 1; allowed/],
  ]) {
    test(`a link that is ${name} is told and the page is a safe one`, () => withPerson(async (context, url) => {
      const { page, faults } = await openPage(context, url + String(hash));
      await settled(page);
      await notice(page, "open").waitFor();
      assert.match(await notice(page, "open").innerText(), /** @type {RegExp} */ (want));
      assert.equal(await page.evaluate(() => location.hash), "");
      assert.match(await page.innerText("#statement"), /sinus/i);
      assert.deepEqual(faults, []);
    }));
  }
});
