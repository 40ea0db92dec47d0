// The timeline as text: every event of the part that is shown, in order. It is
// what a screen reader reads, and it serves everyone who wants to copy a number.

import { el, fill } from "../base/dom.js";
import { count, seconds } from "../base/format.js";
import { pan, shown } from "../model/view.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/client.js").Engine} Engine
 * @typedef {import("../engine/wire.js").Line} Line
 */

const MOST = 600; // lines put into the document at a time

/**
 * @param {HTMLElement} root
 * @param {Store} store
 * @param {Engine} engine
 */
export function listingView(root, store, engine) {
  const head = el("p", { class: "listing-head" });
  const list = el("ol", { class: "lines" });
  const before = el("button", { type: "button", onclick: () => turn(-1) }, "Earlier");
  const after = el("button", { type: "button", onclick: () => turn(1) }, "Later");
  const pane = el("section", { class: "listing", id: "listing", hidden: true, role: "tabpanel", "aria-labelledby": "tab-listing" },
    el("h2", { class: "unseen" }, "Listing of events"),
    el("div", { class: "part" }, head, before, after), list);
  root.append(pane);

  /** @param {number} way */
  function turn(way) {
    const { view, answer } = store.get();
    if (answer) store.set({ view: pan(view, way * 0.95 * shown(view), answer.span_ms) });
  }

  async function refresh() {
    const { view, answer } = store.get();
    if (!answer) return;
    const from = view.t0_ms;
    const to = Math.min(answer.span_ms, from + shown(view));
    const reply = await engine.ask("listing", { from_ms: from, to_ms: to }).catch(() => null);
    if (!reply) return;
    /** @type {Line[]} */
    const lines = reply.json.lines;
    const { selected } = store.get();
    const more = lines.length > MOST ? `; the first ${MOST} are shown` : "";
    head.textContent = `${count(lines.length, "event")} from ${seconds(from)} to ${seconds(to)}${more}`;
    before.disabled = from <= 0;
    after.disabled = to >= answer.span_ms;
    fill(list, lines.slice(0, MOST).map((l) => el("li", null,
      el("span", { class: "at" }, seconds(l.t_ms)),
      el("button", {
        type: "button", class: "link", "data-event": String(l.id), "aria-current": l.id === selected ? "true" : null,
        onclick: () => store.set({ selected: l.id }),
      }, l.text))));
  }

  return {
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (changed.has("tab")) pane.hidden = state.tab !== "listing";
      if (state.tab !== "listing") return;
      if (["tab", "answer", "view"].some((k) => changed.has(k))) refresh();
      if (changed.has("selected")) {
        for (const b of list.querySelectorAll("button")) {
          if (b.dataset.event === String(state.selected)) b.setAttribute("aria-current", "true");
          else b.removeAttribute("aria-current");
        }
      }
    },
    destroy() {
      pane.remove();
    },
  };
}
