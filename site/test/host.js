// What the page tests stand on: the command's own file server on a free port, and
// a Chromium with nothing of an earlier run in it.

import { execFileSync, spawn } from "node:child_process";
import { existsSync, mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { chromium } from "playwright-core";

export const ROOT = fileURLToPath(new URL("../..", import.meta.url));

const PLACES = ["/usr/bin/chromium", "/usr/bin/chromium-browser", "/usr/bin/google-chrome"];
const QUIET = [
  "--no-sandbox", "--disable-gpu", "--disable-background-networking", "--no-first-run", "--disable-component-update",
  "--disable-sync", "--disable-quic", "--disable-default-apps", "--disable-domain-reliability",
];

/**
 * The site as `escapement serve` serves it.
 * @param {{dir?: string, port?: string}} [from]
 */
export async function serveSite({ dir = join("site", "dist"), port = "0" } = {}) {
  const folder = mkdtempSync(join(tmpdir(), "escapement-serve-"));
  const program = join(folder, "escapement");
  execFileSync("go", ["build", "-o", program, "./engine/cmd/escapement"], { cwd: ROOT, stdio: "inherit" });
  const server = spawn(program, ["serve", "-port", port, "-dir", dir], { cwd: ROOT, stdio: ["ignore", "pipe", "inherit"] });
  /** @type {string} */
  const url = await new Promise((resolve, reject) => {
    server.stdout.once("data", (d) => resolve(String(d).trim().split("\n")[0]));
    server.once("exit", (code) => reject(new Error(`escapement serve ended with ${code}`)));
  });
  return {
    url,
    stop() {
      server.kill();
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

/**
 * Tests see each page once, for seconds: compiling its WebAssembly for speed would take
 * more of the machine than it gives back. Benchmarks leave it as it is for people.
 */
export const BRIEF = ["--js-flags=--liftoff-only"];

/** @param {string[]} [flags] beside the usual ones */
export async function openBrowser(flags = []) {
  const executablePath = process.env.CHROMIUM ?? PLACES.find((p) => existsSync(p));
  if (!executablePath) throw new Error("no Chromium found; set CHROMIUM to its path");
  const browser = await chromium.launch({ executablePath, headless: true, args: [...QUIET, ...flags] });
  return { browser, stop: () => browser.close() };
}

/**
 * A person's browser, with nothing kept in it yet. What works offline is left out unless
 * it is asked for: the tests put their own words into what is served.
 * @param {import("playwright-core").Browser} browser
 * @param {import("playwright-core").BrowserContextOptions} [about]
 */
export function newPerson(browser, about) {
  return browser.newContext({ viewport: { width: 1280, height: 800 }, reducedMotion: "reduce", colorScheme: "light", serviceWorkers: "block", ...about });
}

/**
 * Opens the page and writes down all that a page should not do.
 * @param {import("playwright-core").BrowserContext} context
 * @param {string} url
 * @param {{width: number, height: number}} [size]
 */
export async function openPage(context, url, size = { width: 1280, height: 800 }) {
  const page = await context.newPage();
  await page.setViewportSize(size);
  /** @type {string[]} */
  const faults = [];
  page.on("console", (m) => !m.text().includes("Service Worker registration blocked") && faults.push(`console ${m.type()}: ${m.text()}`));
  page.on("pageerror", (e) => faults.push(`error: ${e.message}`));
  page.on("request", (r) => {
    if (!r.url().startsWith(new URL("/", url).href) && !/^(data|blob):/.test(r.url())) faults.push(`request to ${r.url()}`);
  });
  page.on("response", (r) => {
    if (r.status() >= 400) faults.push(`${r.status()} for ${r.url()}`);
  });
  await page.addInitScript(() => document.addEventListener("securitypolicyviolation", (e) => console.error(`against the policy: ${e.violatedDirective} ${e.blockedURI}`)));
  await page.goto(url);
  return { page, faults };
}

/**
 * The fingerprint of the drawn timeline, once the engine is at rest.
 * @param {import("playwright-core").Page} page
 * @returns {Promise<string>}
 */
export async function settled(page) {
  await page.waitForFunction(() => document.body.dataset.fingerprint && document.body.dataset.busy === "false", null, { timeout: 30000 });
  // Two frames, so that what the last reply asked for has been asked and drawn.
  await page.evaluate(() => new Promise((r) => requestAnimationFrame(() => requestAnimationFrame(r))));
  await page.waitForFunction(() => document.body.dataset.busy === "false");
  return page.evaluate(() => document.body.dataset.fingerprint ?? "");
}
