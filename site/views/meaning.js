// What a number means, what is normal and who says so, at the foot of the part that
// shows it: for the pointer, and for the keyboard. Each list of numbers is one stop of
// the Tab key, within which the arrows go.

import { el, fill } from "../base/dom.js";

/**
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 * @typedef {import("../engine/wire.js").Meaning} Meaning
 */

/** A source without its full stop, in parentheses. @param {string} source */
const by = (source) => (source ? ` (${source.replace(/\.$/, "")})` : "");

/** A meaning in one text. @param {Pick<Meaning, "text" | "normal" | "source">} m */
export const told = (m) => `${m.text}${m.normal ? ` Normal ${m.normal}.` : ""}${by(m.source)}`.trim();

/** @typedef {ReturnType<typeof meaningView>} Meanings */

/**
 * @param {HTMLElement} root the part at whose foot it is told
 * @param {Catalogue} catalogue
 */
export function meaningView(root, catalogue) {
  const known = new Map(catalogue.meanings.map((m) => [m.name, m]));
  const foot = el("div", { class: "meaning", "aria-hidden": "true" }); // those who hear it have it as the description of its name
  root.append(foot);

  /** @param {Event} e */
  function explain(e) {
    const what = e.target instanceof Element ? e.target.closest(".means") ?? e.target.closest("li, tr, dt, dd")?.querySelector(".means") : null;
    const name = what ?? (e.target instanceof Element ? e.target.closest("dd")?.previousElementSibling?.querySelector(".means") : null);
    if (name instanceof HTMLElement) fill(foot, el("strong", null, name.dataset.label ?? name.textContent ?? ""), " ", name.title);
  }

  /** Arrows within a list. @param {KeyboardEvent} e */
  function walk(e) {
    const list = e.target instanceof Element && e.target.matches(".means") ? e.target.closest("dl, table, ul") : null;
    const by = { ArrowDown: 1, ArrowUp: -1 }[e.key] ?? 0;
    if (!list || by === 0) return;
    const all = /** @type {HTMLElement[]} */ ([...list.querySelectorAll(".means")]);
    const to = all[all.indexOf(/** @type {HTMLElement} */ (e.target)) + by];
    e.preventDefault();
    e.stopPropagation();
    if (!to) return;
    for (const b of all) b.tabIndex = b === to ? 0 : -1;
    to.focus();
  }
  root.addEventListener("focusin", explain);
  root.addEventListener("pointerover", explain);
  root.addEventListener("keydown", walk);

  return {
    /** @param {string[]} names the first that is known @returns {Meaning | null} */
    of: (...names) => names.map((n) => known.get(n)).find((m) => m !== undefined) ?? null,

    /**
     * The name of a number, which can be asked for its meaning.
     * @param {string} label
     * @param {Pick<Meaning, "text" | "normal" | "source"> | null} m
     */
    name: (label, m) => (m ? el("button", { type: "button", class: "means", title: told(m), "data-help": label, tabIndex: -1 }, label) : label),

    /** Makes a list one stop of the Tab key. @template {Element} T @param {T} list @returns {T} */
    list(list) {
      const first = /** @type {HTMLElement | null} */ (list.querySelector(".means"));
      if (first) first.tabIndex = 0;
      return list;
    },

    /** What is told is of another list. */
    clear: () => fill(foot),
  };
}
