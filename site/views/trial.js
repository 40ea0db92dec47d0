// What came of the selected extra beat, and the scan of its coupling: in the account,
// as words beside the beat, and as a band under its tier.

import { el, fill, say } from "../base/dom.js";
import { num } from "../base/format.js";
import { get, put } from "../model/path.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Extra} Extra
 * @typedef {import("../engine/wire.js").Scan} Scan
 * @typedef {import("../engine/wire.js").Segment} Segment
 */

const TRIES = 12; // couplings tried in one slice, between which the page can cancel

/**
 * @param {HTMLElement} root
 * @param {Store} store
 * @param {import("./hand.js").Ask} ask
 */
export function trialView(root, store, ask) {
  const words = el("div", { class: "sentences" });
  const run = el("button", { type: "button", id: "scan", class: "action", onclick: () => (running ? stop() : start()) }, "Scan the coupling");
  const bar = el("progress", { max: 1, value: 0, "aria-label": "Progress of the scan" });
  const list = el("ol", { class: "segments" });
  const note = el("p", { class: "aside", role: "status" });
  const node = el("section", { class: "trial", "aria-label": "The extra beat", hidden: true }, el("h3", null, "What came of it"), words, el("div", { class: "scan-row" }, run, bar), note, list);
  root.querySelector(".account-body")?.before(node);
  let running = 0; // number of the scan that runs, or 0
  let serial = 0;
  let asked = ""; // what the outcome was last asked for

  /** The plan without where the beat stands: a scan holds for all of those. @param {any} plan @param {number} item */
  const apart = (plan, item) => JSON.stringify(put(plan, `interventions[${item}].at_ms`, 0));

  async function explain() {
    const { selected, scene, computed, plan } = store.get();
    const made = scene?.times.find((t) => t[0] === selected)?.[2] ?? 0;
    if (!made || computed !== plan) {
      if (!made && store.get().extra) store.set({ extra: null });
      asked = "";
      return;
    }
    const key = `${selected} ${JSON.stringify(plan)}`;
    if (key === asked) return;
    asked = key;
    const reply = await ask("extra", { event: selected });
    if (reply && store.get().selected === selected) store.set({ extra: reply.json });
  }

  async function start() {
    const { extra, plan } = store.get();
    if (!extra) return;
    const own = ++serial;
    running = own;
    const key = apart(plan, extra.item);
    store.set({ scan: null });
    for (let first = true; running === own; first = false) {
      const reply = await ask("scan", { item: extra.item, start: first, tries: TRIES });
      if (running !== own) return;
      if (!reply?.json) break;
      store.set({ scan: { ...reply.json, key, site: String(get(plan, `interventions[${extra.item}].site`)) } });
      if (reply.json.finished) break;
    }
    if (running === own) running = 0;
    show();
  }

  function stop() {
    running = 0;
    show();
  }

  /** Puts the beat at a coupling. @param {number} coupling */
  function place(coupling) {
    const { scan, plan } = store.get();
    if (!scan) return;
    store.settle();
    store.edit(put(plan, `interventions[${scan.item}].at_ms`, Number((scan.from_ms + coupling).toFixed(3))), "");
    store.settle();
  }

  function show() {
    const { extra, scan, selected } = store.get();
    node.hidden = !extra || selected === 0;
    if (!extra) return;
    fill(words, extra.sentences.map((s) => el("p", null, s)));
    run.hidden = !extra.single;
    say(run, running ? "Cancel the scan" : "Scan the coupling");
    bar.hidden = running === 0;
    bar.value = scan ? scan.done / scan.of : 0;
    say(note, scan?.fault ? scan.fault : scan?.jump ? `AH grows by ${num(scan.jump.by_ms, 0)} ms from ${scan.jump.coupling + 10} to ${scan.jump.coupling} ms: two pathways in the AV node.` : "");
    fill(list, scan?.item === extra.item ? scan.segments.map((s, i) => el("li", null,
      el("button", { type: "button", class: "segment", "data-from": String(s.from), "data-slug": s.slug, onclick: () => place(Math.round((s.from + s.to) / 2)), title: "Put the beat here" },
        el("b", { "data-kind": kindOf(s.slug) }, letter(i)), el("span", { class: "at" }, s.from === s.to ? `${s.from} ms` : `${s.from}–${s.to} ms`), el("span", null, told(s))))) : []);
  }

  return {
    place,

    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (changed.has("plan") && state.scan && apart(state.plan, state.scan.item) !== state.scan.key) {
        running = 0;
        store.set({ scan: null });
      }
      if (["scene", "selected", "answer"].some((k) => changed.has(k))) explain();
      if (["extra", "scan", "selected"].some((k) => changed.has(k))) show();
    },
    destroy() {
      running = 0;
      node.remove();
    },
  };
}

/** @param {number} i */
export const letter = (i) => String.fromCharCode(65 + (i % 26));

/** The sort of an outcome, for its colour. @param {string} slug */
export function kindOf(slug) {
  if (/started|echo/.test(slug)) return "started";
  return slug.split(/[_+]/)[0];
}

/** An outcome over its range of couplings. @param {Segment} s */
export function told(s) {
  const [a, b] = s.passage_ms;
  const name = s.text.replace(/, (missed by|AV|VA) [\d.]+ ms/g, "").replace(/, [\d.]+ ms too early/, "");
  return a > 0 && b > 0 ? `${name} (${Math.abs(a - b) < 1 ? num(a, 0) : `${num(a, 0)} to ${num(b, 0)}`} ms)` : name;
}
