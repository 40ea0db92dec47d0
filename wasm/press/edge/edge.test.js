// The print service on an edge host: every route answers, refusals are told, and a
// request gives the same bytes there as from the native handler.

import assert from "node:assert/strict";
import { spawn } from "node:child_process";
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { join } from "node:path";
import { after, before, describe, test } from "node:test";
import { fileURLToPath } from "node:url";
import { ROOT, serveSite } from "../../../site/test/host.js";

const HERE = fileURLToPath(new URL(".", import.meta.url));

/** Starts workerd on a free loopback port, which it tells on a pipe of its own. */
async function startEdge() {
  const program = createRequire(import.meta.url)("workerd").default;
  const child = spawn(program, ["serve", "worker.capnp", "--control-fd=3"], { cwd: HERE, stdio: ["ignore", "inherit", "inherit", "pipe"] });
  const control = /** @type {import("node:stream").Readable} */ (child.stdio[3]);
  /** @type {number} */
  const port = await new Promise((resolve, reject) => {
    let text = "";
    control.on("data", (d) => {
      text += d;
      const found = /"event":"listen".*?"port":(\d+)/.exec(text);
      if (found) resolve(Number(found[1]));
    });
    child.once("exit", (code) => reject(new Error(`workerd ended with ${code}`)));
    child.once("error", reject);
  });
  return { url: `http://127.0.0.1:${port}/`, stop: () => child.kill() };
}

const preset = (/** @type {string} */ name) => JSON.parse(readFileSync(join(ROOT, "presets", `${name}.json`), "utf8"));

/** Fields that every print takes, small enough to be quick. */
const PLAIN = { to_ms: 2500, dots_mm: 4, date: "2026-12-01", version: "test" };

describe("the print service at the edge", () => {
  /** @type {Awaited<ReturnType<typeof startEdge>>} */
  let edge;
  /** @type {Awaited<ReturnType<typeof serveSite>>} */
  let native;
  before(async () => {
    [edge, native] = await Promise.all([startEdge(), serveSite()]);
  });
  after(() => {
    edge?.stop();
    native?.stop();
  });

  /** @param {string} route @param {any} body */
  async function both(route, body) {
    const ask = async (/** @type {string} */ url) => {
      const r = await fetch(`${url}press/${route}`, { method: "POST", headers: { "Content-Type": "application/json" }, body: JSON.stringify(body) });
      return { status: r.status, type: r.headers.get("Content-Type"), pages: r.headers.get("X-Pages"), bytes: Buffer.from(await r.arrayBuffer()) };
    };
    return [await ask(edge.url), await ask(native.url)];
  }

  test("every route gives the bytes of the native handler", async (t) => {
    const list = await (await fetch(`${edge.url}press/`)).json();
    const routes = list.diagnoses[0].allowed.split(", ");
    assert.ok(routes.length >= 15, routes.join());
    for (const route of routes) {
      await t.test(route, async () => {
        const [there, here] = await both(route.replace("/press/", ""), { ...PLAIN, plan: preset("dual-upper-rate-wenckebach"), before: preset("wenckebach-4-3") });
        assert.equal(there.status, 200, there.bytes.toString());
        assert.deepEqual([there.status, there.type, there.pages, there.bytes.length], [here.status, here.type, here.pages, here.bytes.length]);
        assert.ok(there.bytes.equals(here.bytes), "as long, but other bytes");
      });
    }
  });

  test("plans of many kinds give the same bytes", async () => {
    for (const name of ["lbbb", "sa-exit-2", "pvc-retrograde", "dual-endless-loop", "biventricular-lost", "his-output-steps"]) {
      for (const route of ["strip.svg", "twelve.pdf"]) {
        const [there, here] = await both(route, { ...PLAIN, plan: preset(name) });
        assert.equal(there.status, 200, there.bytes.toString());
        assert.ok(there.bytes.equals(here.bytes), `${route} of ${name} differs`);
      }
    }
  });

  test("a plan in a query is printed too", async () => {
    const query = new URLSearchParams({ plan: "normal", to_ms: "2000", date: "2026-12-01" });
    const [there, here] = await Promise.all([edge.url, native.url].map(async (url) => Buffer.from(await (await fetch(`${url}press/strip.pdf?${query}`)).arrayBuffer())));
    assert.equal(there.subarray(0, 4).toString(), "%PDF");
    assert.ok(there.equals(here));
  });

  test("refusals are the same: status and words", async () => {
    /** @type {[string, string, any, number][]} */
    const cases = [
      ["a bad plan", "strip.pdf", { plan: { format: "escapement-plan/1", heart: { sinus: { rate_bpm: "ninety" } } } }, 422],
      ["a bad option", "strip.pdf", { plan: "normal", speed_mm_s: -1 }, 400],
      ["no such print", "poster.pdf", { plan: "normal" }, 404],
    ];
    for (const [name, route, body, status] of cases) {
      const [there, here] = await both(route, body);
      assert.equal(there.status, status, name);
      assert.equal(there.bytes.toString(), here.bytes.toString(), name);
    }
    for (const url of [edge.url, native.url]) {
      const r = await fetch(`${url}press/strip.pdf`, { method: "DELETE" });
      assert.equal(r.status, 405);
      assert.equal(r.headers.get("Allow"), "GET, POST");
    }
  });

  test("one request leaves nothing for the next, and several can run at once", async () => {
    const order = { ...PLAIN, plan: preset("normal") };
    const all = await Promise.all([1, 2, 3].map(() => both("ladder.svg", order)));
    for (const [there, here] of all) assert.ok(there.bytes.equals(here.bytes) && there.bytes.equals(all[0][0].bytes));
  });
});
