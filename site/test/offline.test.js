// The page without a network, its versions, its policy, and that it asks no other place.

import assert from "node:assert/strict";
import { execFileSync } from "node:child_process";
import { appendFileSync, cpSync, mkdtempSync, readFileSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { after, before, describe, test } from "node:test";
import { BRIEF, newPerson, openBrowser, openPage, ROOT, serveSite, settled } from "./host.js";
import { AH, barePage, onPage, openPreset, stage } from "./walk.js";

/** @typedef {import("playwright-core").Page} Page */

/** A built site of one's own, to change. */
function ownSite() {
  const dir = mkdtempSync(join(tmpdir(), "escapement-site-"));
  cpSync(join(ROOT, "site", "dist"), dir, { recursive: true });
  return dir;
}

/** Makes the next version of a site. @param {string} dir @param {string} css that tells it */
function nextVersion(dir, css) {
  appendFileSync(join(dir, "css", "tokens.css"), css);
  cpSync(join(ROOT, "site", "offline.js"), join(dir, "offline.js"));
  execFileSync("go", ["run", "./site/stamp", dir], { cwd: ROOT, stdio: ["ignore", "ignore", "inherit"] });
}

/** Waits until the page is kept whole. @param {Page} page */
const kept = (page) => page.waitForFunction(() => navigator.serviceWorker.controller !== null && document.documentElement.dataset.offline === "whole", null, { timeout: 60000 });

/** @param {Page} page */
const mark = (page) => page.evaluate(() => getComputedStyle(document.documentElement).getPropertyValue("--version-mark").trim());

describe("without a network", () => {
  /** @type {Awaited<ReturnType<typeof openBrowser>>} */
  let browser;
  before(async () => {
    browser = await openBrowser(BRIEF);
  });
  after(() => browser?.stop());

  /** @param {(page: Page, site: {dir: string, stop: () => void, faults: string[]}) => Promise<void>} walk */
  async function visit(walk) {
    const dir = ownSite();
    const site = await serveSite({ dir });
    const context = await newPerson(browser.browser, { serviceWorkers: "allow" });
    try {
      const { page, faults } = await openPage(context, site.url);
      await settled(page);
      await kept(page);
      await walk(page, { dir, stop: site.stop, faults });
    } finally {
      await context.close();
      site.stop();
      rmSync(dir, { recursive: true, force: true });
    }
  }

  test("after one visit everything works with the server stopped", () => visit(async (page, { dir, stop, faults }) => {
    stop();
    await page.reload();
    await settled(page);
    await openPreset(page, "wenckebach-4-3");
    await page.fill(AH, "91");
    const print = await settled(page);
    await page.reload();
    assert.equal(await settled(page), print, "the plan too");
    assert.deepEqual(faults, []);
    const [listed] = /\{"version".*\}(?=;)/.exec(readFileSync(join(dir, "offline.js"), "utf8")) ?? [];
    const { files, later } = JSON.parse(listed ?? "");
    for (const name of Object.keys({ ...files, ...later })) {
      const status = await page.evaluate((n) => fetch(n).then((r) => r.status), name === "index.html" ? "./" : name);
      assert.equal(status, 200, name);
    }
  }));

  test("a newer version is told, waits until it is asked for, and comes whole", () => visit(async (page, { dir, faults }) => {
    await page.fill(AH, "91");
    nextVersion(dir, ":root { --version-mark: two; }");
    await page.reload();
    await settled(page);
    assert.equal(await mark(page), "", "the old version is served whole");
    await page.waitForSelector('[data-notice="newer"]', { timeout: 60000 });
    assert.match(await page.innerText('[data-notice="newer"]'), /A newer version of the page is ready/);
    await Promise.all([page.waitForEvent("load"), page.click('[data-notice="newer"] button:text("Reload")')]);
    await settled(page);
    assert.equal(await mark(page), "two");
    assert.equal(await page.inputValue(AH), "91");
    assert.equal((await page.evaluate(() => caches.keys())).length, 1, "the old version is gone");
    assert.deepEqual(faults, []);
  }));

  test("files of two versions are never mixed: a half-copied site changes nothing", () => visit(async (page, { dir }) => {
    nextVersion(dir, ":root { --version-mark: three; }");
    appendFileSync(join(dir, "css", "tokens.css"), "/* not what the list says */");
    const failed = page.evaluate(async () => {
      const registration = await navigator.serviceWorker.ready;
      const found = new Promise((resolve) => registration.addEventListener("updatefound", () => registration.installing?.addEventListener("statechange", (e) => resolve(/** @type {any} */ (e.target).state))));
      await registration.update().catch(() => {});
      return found;
    });
    assert.equal(await failed, "redundant");
    await page.reload();
    await settled(page);
    assert.equal(await mark(page), "");
    assert.equal(await page.locator('[data-notice="newer"]').count(), 0);
  }));
});

describe("what the page may do", () => {
  stage();

  test("every view is shown without a word to another place and without breaking the policy", () => onPage(async (page) => {
    for (const preset of ["wenckebach-4-3", "dual-endless-loop"]) {
      await openPreset(page, preset);
      for (const tab of await page.locator('[role="tab"]').all()) {
        await tab.click();
        await settled(page);
      }
      await page.click("#tab-timeline");
      for (const name of await page.locator(".toolbar summary").all()) {
        await name.click();
        await page.keyboard.press("Escape");
      }
      await page.focus("#timeline");
      for (const key of [".", ".", "f", "0", "1", "?", "Escape", "k", "Escape", "p", "Escape"]) {
        await page.keyboard.press(key);
        await settled(page);
      }
      await page.click(".tools button:text('Dark'), .tools button:text('Light')");
      await settled(page);
    }
    // onPage fails on any request elsewhere, any console message and any violation.
  }));

  test("the policy stops inline script, eval, and anything from elsewhere", async () => {
    const { page } = await barePage();
    await settled(page);
    const got = await page.evaluate(async () => {
      /** @type {string[]} */
      const stopped = [];
      document.addEventListener("securitypolicyviolation", (e) => stopped.push(e.effectiveDirective));
      const script = document.createElement("script");
      script.textContent = "window.ran = true";
      document.body.append(script);
      document.body.insertAdjacentHTML("beforeend", '<p style="color: red" id="styled" onclick="window.ran = true">x</p><iframe srcdoc="x"></iframe>');
      document.getElementById("styled")?.click();
      // Later: what the test itself runs is let through.
      const evaluated = await new Promise((resolve) => setTimeout(() => {
        try {
          resolve((0, eval)("1") === 1);
        } catch {
          resolve(false);
        }
      }));
      const fetched = await fetch("https://example.org/").then(() => true, () => false);
      const image = new Image();
      image.src = "https://example.org/x.png";
      await new Promise((r) => { image.onerror = r; });
      return { stopped: [...new Set(stopped)].sort(), ran: /** @type {any} */ (window).ran, evaluated, fetched };
    });
    assert.equal(got.ran, undefined);
    assert.equal(got.evaluated, false);
    assert.equal(got.fetched, false);
    for (const want of ["script-src-elem", "script-src-attr", "script-src", "style-src-attr", "connect-src", "img-src"]) assert.ok(got.stopped.includes(want), `${want} of ${got.stopped}`);
    await page.context().close();
  });

  test("the manifest names icons that are there, in their sizes", () => onPage(async (page) => {
    const icons = await page.evaluate(async () => {
      const manifest = await (await fetch(/** @type {HTMLLinkElement} */ (document.querySelector('link[rel="manifest"]')).href)).json();
      return Promise.all(manifest.icons.filter((/** @type {any} */ i) => i.type === "image/png").map(async (/** @type {any} */ i) => {
        const bitmap = await createImageBitmap(await (await fetch(i.src)).blob());
        return [i.sizes, `${bitmap.width}x${bitmap.height}`];
      }));
    });
    assert.equal(icons.length, 3);
    for (const [want, got] of icons) assert.equal(got, want);
  }));

  test("an engine that does not load is told, and the next try brings it", async () => {
    const { page } = await barePage();
    await settled(page);
    await page.fill(AH, "133");
    await page.waitForTimeout(450);
    await page.route("**/escapement.wasm", (route) => route.abort());
    await page.reload();
    await page.waitForSelector("#load-again");
    assert.match(await page.innerText("#fault"), /The engine could not be loaded\. What was kept here is safe\./);
    await page.unroute("**/escapement.wasm");
    await page.click("#load-again");
    await settled(page);
    assert.equal(await page.isHidden("#fault"), true);
    assert.equal(await page.inputValue(AH), "133");
    await page.context().close();
  });
});
