// The right-hand side: why the selected event came, or, with none selected, what
// was measured and what it is consistent with.

import { el, fill } from "../base/dom.js";
import { num, seconds } from "../base/format.js";
import { reveal } from "../model/view.js";
import { deviceParts } from "./arithmetic.js";
import { meaningView } from "./meaning.js";
import { rangeBar, verdict } from "./range.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Account} Account
 * @typedef {import("../engine/wire.js").Answer} Answer
 * @typedef {import("../engine/wire.js").Line} Line
 * @typedef {import("../engine/wire.js").Measured} Measured
 * @typedef {import("../engine/wire.js").Finding} Finding
 */

const MOST_LED = 12; // consequences listed

/**
 * @param {HTMLElement} root
 * @param {Store} store
 * @param {(path: string) => void} focusSetting
 * @param {import("./before.js").BeforeView} before
 * @param {(way: {shiftKey: boolean}, finding?: number) => void} jump goes to the next place of a finding
 * @param {import("../engine/wire.js").Catalogue} catalogue
 */
export function accountView(root, store, focusSetting, before, jump, catalogue) {
  const title = el("h2", null, "Measured");
  const back = el("button", { type: "button", id: "deselect", onclick: () => store.set({ selected: 0, gap: null, lit: [] }) }, "Measured");
  const shut = el("button", { type: "button", class: "drawer-close", onclick: () => store.set({ drawer: "" }) }, "Close");
  const body = el("div", { class: "account-body" });
  root.append(el("div", { class: "part" }, title, back, shut), body);
  const means = meaningView(root, catalogue);
  const device = deviceParts(means);

  /** @param {number} id @param {number} t */
  function go(id, t) {
    const { view, answer } = store.get();
    if (answer) store.set({ selected: id, lit: [], view: reveal(view, t, answer.span_ms) });
  }

  /** @param {Account} a */
  function event(a) {
    title.textContent = a.title;
    back.hidden = false;
    const [own, ...causes] = a.chain;
    fill(body,
      el("p", { class: "when" }, seconds(a.t_ms)),
      el("div", { class: "sentences" }, a.sentences.map(sentence)),
      a.against && el("p", { class: "against" }, a.against),
      a.margin && !a.sentences.some((s) => s.includes(a.margin)) && el("p", { class: "margin" }, a.margin),
      a.not && el("h3", null, a.not.title),
      a.not && el("div", { class: "sentences" }, a.not.sentences.map(sentence)),
      a.not && el("ol", { class: "led" }, a.not.lines.map(step)),
      involved(a.settings),
      causes.length > 0 && el("h3", null, "How it came about"),
      causes.length > 0 && el("ol", { class: "chain" }, el("li", { class: "own" }, el("span", { class: "at" }, seconds(own.t_ms)), el("span", null, own.text)), causes.map(step)),
      a.led.length > 0 && el("h3", null, "What it led to"),
      a.led.length > 0 && el("ol", { class: "led" }, a.led.slice(0, MOST_LED).map(step)));
  }

  /** Why no stimulus came. @param {import("../engine/wire.js").Gap} g */
  function gap(g) {
    title.textContent = g.title;
    back.hidden = false;
    fill(body,
      el("p", { class: "when" }, `${seconds(g.from_ms)} to ${seconds(g.to_ms)}`),
      el("div", { class: "sentences" }, g.sentences.map(sentence)),
      involved(g.settings),
      el("h3", null, "What this rests on"),
      el("ol", { class: "led" }, g.lines.map(step)));
  }

  /** A sentence, in which an event that is named by its number is a link. @param {string} text */
  function sentence(text) {
    return el("p", null, text.split(/(event \d+)/).map((piece) => {
      const id = Number(/^event (\d+)$/.exec(piece)?.[1] ?? 0);
      return id ? el("button", { type: "button", class: "link", "data-event": String(id), onclick: () => store.set({ selected: id, lit: [] }) }, piece) : piece;
    }));
  }

  /** Settings that had a part, each a way to its row. @param {import("../engine/wire.js").Linked[]} list */
  function involved(list) {
    return (list ?? []).length > 0 && el("p", { class: "involved" }, "Settings: ", list.map((s) =>
      el("button", { type: "button", class: "link", "data-setting": s.path, onclick: () => focusSetting(s.path) }, `${s.label} ${num(s.value, 1)} ${s.unit}`.trim())));
  }

  /** @param {Line} s */
  function step(s) {
    return el("li", null,
      el("span", { class: "at" }, seconds(s.t_ms)),
      el("button", { type: "button", class: "link", "data-event": String(s.id), onclick: () => go(s.id, s.t_ms) }, s.text));
  }

  /** @param {Answer} answer @param {State} state */
  function measured(answer, state) {
    back.hidden = true;
    if (before.shown(state)) {
      title.textContent = "Differences";
      fill(body, before.panel(state, means));
      return;
    }
    title.textContent = "Measured";
    const note = String(state.plan.note || answer.note || "");
    const preset = catalogue.presets.find((p) => p.name === state.preset);
    const old = preset !== undefined && preset.plan !== state.plan && preset.plan.note === state.plan.note; // its numbers may no longer hold
    fill(body,
      before.tabs(state),
      note && el("section", { class: "look" }, el("h3", null, old ? "Look for, in the preset as it was" : "Look for"), el("p", null, note)),
      answer.device && device.sums(answer.device),
      answer.device && device.counts(answer.device),
      answer.device && el("h3", null, "Medians of the strip"),
      means.list(el("dl", { class: "numbers" }, answer.measured.filter((m) => m.value !== null).map(row).flat())),
      answer.findings.length > 0 && el("section", null,
        el("h3", null, "Consistent with"),
        means.list(el("ul", { class: "findings" }, answer.findings.map(finding)))),
      el("p", { class: "hint" }, "Press any stroke, wave or bar to read why it came."));
  }

  /** @param {Measured} m */
  function row(m) {
    const bar = rangeBar();
    bar.show(m.value, m.normal);
    const how = m.normal && m.value !== null ? verdict(m.value, m.normal) : "normal";
    return [
      el("dt", null, means.name(m.label, { text: m.help, normal: m.normal ? `${num(m.normal[0], 0)}–${num(m.normal[1], 0)}${m.unit === "°" ? "°" : ` ${m.unit}`}` : "", source: m.source })),
      el("dd", { "data-verdict": how },
        el("span", { class: "value" }, num(m.value ?? NaN, 0)),
        el("span", { class: "unit" }, m.unit),
        bar.node,
        el("span", { class: "normal" }, m.normal ? `${how === "normal" ? "" : `${how}, `}${num(m.normal[0], 0)}–${num(m.normal[1], 0)}` : "")),
    ];
  }

  /** @param {Finding} f @param {number} at */
  function finding(f, at) {
    const first = f.events[0] ?? 0;
    const places = (store.get().answer?.overview.flags ?? []).filter((p) => p.finding === at).length;
    /** @param {number[]} lit */
    const light = (lit) => store.set({ lit });
    return el("li", null,
      first
        ? el("button", {
            type: "button", class: "link",
            onpointerenter: () => light(f.events), onpointerleave: () => light([]),
            onfocus: () => light(f.events), onblur: () => light([]),
            onclick: () => go(first, f.t_ms),
          }, f.text)
        : el("span", null, f.text),
      places > 1 && el("button", { type: "button", class: "places", "aria-label": `Next of ${places} places: ${f.text}`, title: "Goes to the next place on the strip", onclick: () => jump({ shiftKey: false }, at) }, `next of ${places} places`),
      " ",
      means.name("what it means", means.of(`finding:${f.slug}`)),
      f.note && el("p", { class: "aside" }, f.note),
      f.rivals.length > 0 && el("p", { class: "aside" }, `Fits as well: ${f.rivals.join("; ")}.`));
  }

  return {
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (!["answer", "account", "selected", "gap", "contrast", "panel", "before"].some((k) => changed.has(k))) return;
      if (state.selected !== 0) {
        if (state.account && state.account.event === state.selected) event(state.account);
      } else if (state.gap) gap(state.gap);
      else if (state.answer) measured(state.answer, state);
      if (changed.has("selected")) {
        body.scrollTop = 0;
        means.clear();
      }
    },
    destroy() {
      fill(root);
    },
  };
}
