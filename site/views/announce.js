// What happened on the sheet, for people who hear the page: the statement after a
// change, the selected event, what came of an extra beat, the differences, a scan.

import { el, say } from "../base/dom.js";
import { whenQuiet } from "../base/frame.js";
import { count, seconds } from "../base/format.js";
import { told } from "./trial.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 */

const QUIET_MS = 350; // values that are moved quickly are told once, at the end

/**
 * @param {HTMLElement} root
 * @param {Store} store
 */
export function announceView(root, store) {
  const node = el("div", { class: "unseen", id: "said", role: "status", "aria-live": "polite" });
  root.append(node);
  /** What is due, by kind: the newest of each. @type {Map<string, string>} */
  const due = new Map();
  const speak = whenQuiet(QUIET_MS, () => {
    if (due.size > 0) say(node, [...due.values()].join(" "));
    due.clear();
  });
  let statement = "";
  let event = "";
  let extra = "";
  let contrast = "";
  let scan = "";

  /** @param {State} s */
  function events(s) {
    const a = s.account;
    if (s.selected === 0 || !a || a.event !== s.selected) return "";
    return [`${seconds(a.t_ms)}, ${a.title}.`, a.sentences[0] ?? "", a.against ?? ""].join(" ").trim();
  }

  /** @param {State} s */
  function differences(s) {
    if (!s.contrast) return "";
    const { gone, new: fresh, moved, altered } = s.contrast.events;
    return gone + fresh + moved + altered === 0 ? "Compared with before: no event differs."
      : `Compared with before: ${gone} events gone, ${fresh} new, ${moved} moved, ${altered} otherwise changed.`;
  }

  /** @param {State} s */
  function outcomes(s) {
    if (!s.scan?.finished) return "";
    return `Scan finished, ${count(s.scan.segments.length, "outcome")}: ${s.scan.segments.map((g) => `${g.from} to ${g.to} ms ${told(g)}`).join("; ")}.`;
  }

  /** @param {string} kind @param {string} before @param {string} now @returns {string} */
  function tell(kind, before, now) {
    if (now !== before && now !== "") due.set(kind, now);
    return now;
  }

  return {
    /** @param {State} s @param {Set<string>} changed */
    update(s, changed) {
      if (s.present) return; // the presentation speaks for itself, and must not tell what comes
      if (changed.has("answer") && s.answer) {
        const now = s.answer.statement.map((c) => c.text).join("");
        if (statement !== "" && statement !== now) due.set("statement", now);
        statement = now;
      }
      if (changed.has("account") || changed.has("selected")) event = tell("event", event, events(s));
      if (changed.has("extra")) extra = tell("extra", extra, s.extra ? `What came of it: ${s.extra.text}.` : "");
      if (changed.has("contrast")) contrast = tell("contrast", contrast, differences(s));
      if (changed.has("scan")) scan = tell("scan", scan, outcomes(s));
      if (changed.has("gap") && s.gap) due.set("gap", `${s.gap.title}. ${s.gap.sentences.join(" ")}`);
      if (due.size > 0) speak();
    },
    destroy() {
      node.remove();
    },
  };
}
