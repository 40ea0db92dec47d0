// A plan in a link, and in a file: the page's code and the command's read each other's.

import assert from "node:assert/strict";
import { execFileSync } from "node:child_process";
import { mkdtempSync, readdirSync, readFileSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { after, before, test } from "node:test";
import { deflateSync } from "node:zlib";
import { fileName, NotAPlan, readPlan, writePlan } from "../model/document.js";
import { decodeLink, encodeLink, PREFIX } from "../model/link.js";
import { ROOT } from "./host.js";

const folder = mkdtempSync(join(tmpdir(), "escapement-link-"));
const program = join(folder, "escapement");
before(() => execFileSync("go", ["build", "-o", program, "./engine/cmd/escapement"], { cwd: ROOT, stdio: "inherit" }));
after(() => rmSync(folder, { recursive: true, force: true }));

/** @param {string[]} args */
const command = (...args) => execFileSync(program, args, { cwd: ROOT, encoding: "utf8", stdio: ["ignore", "pipe", "pipe"] }).trim();

/** @param {string | Buffer} text */
const pack = (text) => PREFIX + deflateSync(text).toString("base64url");

/** What the command finds wrong with a link, or "". @param {string} link */
function refusal(link) {
  try {
    command("measure", link);
    return "";
  } catch (err) {
    return String(/** @type {any} */ (err).stderr);
  }
}

test("the page reads the command's links and the command the page's", async () => {
  const presets = readdirSync(join(ROOT, "presets")).filter((f) => f.endsWith(".json") && f !== "order.json");
  for (const file of presets.slice(0, 12)) {
    const plan = JSON.parse(readFileSync(join(ROOT, "presets", file), "utf8"));
    const theirs = command("link", join("presets", file));
    assert.deepEqual((await decodeLink(theirs)).plan, plan, file);
    const ours = await encodeLink(plan);
    assert.equal(command("link", `https://example.org/x/${ours}`), theirs, file);
  }
});

test("values that are wrong travel too, to be told at their fields", async () => {
  const plan = { format: "escapement-plan/1", title: "Ä → 心", heart: { sinus: { rate_bpm: "ninety" } }, odd: [null, { a: 1 }] };
  assert.deepEqual(await decodeLink(await encodeLink(plan)), { plan, told: [] });
});

const whole = pack('{"format":"escapement-plan/1"}');
const bomb = pack(Buffer.alloc(64 << 20, 32));

for (const [name, link, want] of /** @type {[string, string, RegExp][]} */ ([
  ["no fragment", "https://example.org/", /holds no plan/],
  ["empty", PREFIX, /Nothing stands after/],
  ["a full stop after it", `${whole}.`, /"\." at place \d+; allowed: letters/],
  ["another letter than a link has", `${PREFIX}ab%20c`, /"%" at place 3/],
  ["truncated", whole.slice(0, -9), /cut off/],
  ["cut in the middle of a letter", `${PREFIX}abcde`, /cut off/],
  ["only a head", `${PREFIX}eA`, /cut off/],
  ["changed", `${whole.slice(0, 14)}${whole[14] === "x" ? "y" : "x"}${whole.slice(15)}`, /changed/],
  ["not deflated", PREFIX + Buffer.from("{}").toString("base64url"), /changed/],
  ["a bomb", bomb, /more than 1048576 bytes/],
  ["not UTF-8", pack(Buffer.from([0x7b, 0xff, 0x7d])), /UTF-8/],
  ["not JSON", pack("hello"), /not JSON/],
  ["a list", pack("[1,2]"), /holds \[1,2\]; allowed: an object/],
  ["nothing", pack("null"), /holds null/],
  ["another format", pack('{"format":"escapement-plan/9"}'), /format is "escapement-plan\/9"; allowed: "escapement-plan\/1"/],
  ["no format", pack("{}"), /format is nothing/],
  ["nested without end", pack(`{"format":"escapement-plan/1","a":${"[".repeat(300000)}${"]".repeat(300000)}}`), /nested more than 32 deep/],
])) {
  test(`a link that is bad (${name}) is refused in words, here and by the command`, async () => {
    await assert.rejects(decodeLink(link), (err) => err instanceof NotAPlan && want.test(err.message));
    if (link.length < 100000) assert.notEqual(refusal(link), "");
  });
}

test("keys of a prototype are values like others and change nothing", async () => {
  const { plan } = await decodeLink(pack('{"format":"escapement-plan/1","__proto__":{"span_ms":1},"constructor":{"prototype":{"x":1}}}'));
  assert.equal(plan.span_ms, undefined);
  assert.equal(/** @type {any} */ ({}).x, undefined);
  assert.equal(Object.getPrototypeOf(plan), Object.prototype);
  assert.match(JSON.stringify(plan), /"__proto__":\{"span_ms":1\}/, "it is still there, to be told");
});

test("a number that no page can hold is told, and refused at its field", () => {
  const { plan, told } = readPlan('{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":1e999}}}');
  assert.equal(plan.heart.sinus.rate_bpm, "too large a number");
  assert.deepEqual(told, ["heart.sinus.rate_bpm holds a number larger than can be kept."]);
});

test("a file that is not JSON is told in the browser's words, with the place where it says one", () => {
  assert.throws(() => readPlan('{\n "format": x}'), /not JSON.*: Unexpected token/);
  assert.throws(() => readPlan('{\n "format": 1,}'), /not JSON \(line 2, column 14\): Expected/);
});

test("a plan survives its file", () => {
  const plan = { format: "escapement-plan/1", title: "Two: one, Ü", heart: { av_node: { slow: null } } };
  assert.deepEqual(readPlan(`\uFEFF${writePlan(plan)}`).plan, plan);
  assert.equal(fileName(plan, ""), "two-one-u.json");
  assert.equal(fileName({}, "…"), "plan.json");
});
