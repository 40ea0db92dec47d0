// Counts tests. For Go's test events it prints what failed, with its output, and a
// line of counts; "total" adds such lines and a TAP report up to the last line.

import { readFileSync } from "node:fs";

const [mode, ...files] = process.argv.slice(2);
const read = (file) => readFileSync(file, "utf8");

if (mode === "total") {
  const sum = { passed: 0, failed: 0, skipped: 0 };
  const counted = { pass: "passed", fail: "failed", cancelled: "failed", skipped: "skipped", todo: "skipped" };
  for (const file of files) {
    const text = read(file);
    for (const m of text.matchAll(/^\w+: (\d+) passed, (\d+) failed, (\d+) skipped$/gm)) {
      sum.passed += Number(m[1]);
      sum.failed += Number(m[2]);
      sum.skipped += Number(m[3]);
    }
    for (const m of text.matchAll(/^# (pass|fail|cancelled|skipped|todo) (\d+)$/gm)) sum[counted[m[1]]] += Number(m[2]);
  }
  console.log(`${sum.passed} passed, ${sum.failed} failed, ${sum.skipped} skipped`);
  process.exit(sum.failed > 0 || sum.passed === 0 ? 1 : 0);
}

const [events, errors] = files;
const sum = { pass: 0, fail: 0, skip: 0 };
const output = new Map();
const parents = new Set();
const ended = [];
for (const line of read(events).split("\n")) {
  if (!line.startsWith("{")) {
    if (line.trim()) console.log(line);
    continue;
  }
  const e = JSON.parse(line);
  const name = e.Test ? `${e.Package} ${e.Test}` : e.Package ?? e.ImportPath ?? "";
  if (e.Action === "output" || e.Action === "build-output") output.set(name, (output.get(name) ?? "") + e.Output);
  if (e.Test?.includes("/")) parents.add(`${e.Package} ${e.Test.slice(0, e.Test.lastIndexOf("/"))}`);
  if (["pass", "fail", "skip", "build-fail"].includes(e.Action)) ended.push({ ...e, name });
}
for (const e of ended) {
  if (e.Action === "build-fail") {
    console.log(`does not build: ${e.name}\n${output.get(e.name) ?? ""}`);
    sum.fail++;
  } else if (e.Action === "fail") {
    console.log(`FAIL ${e.name}\n${output.get(e.name) ?? ""}`);
    if (e.Test && !parents.has(e.name)) sum.fail++;
    else if (!e.Test && !ended.some((o) => o.Test && o.Package === e.Package && o.Action === "fail")) sum.fail++; // it did not get as far as a test
  } else if (e.Action === "skip" && e.Test) {
    console.log(`skipped ${e.name}: ${(output.get(e.name) ?? "").split("\n").filter((l) => !/^\s*(===|---)/.test(l)).join(" ").trim()}`);
    if (!parents.has(e.name)) sum.skip++;
  } else if (e.Action === "pass" && e.Test && !parents.has(e.name)) sum.pass++;
}
const noise = read(errors).trim();
if (noise) console.log(noise);
console.log(`${mode}: ${sum.pass} passed, ${sum.fail} failed, ${sum.skip} skipped`);
