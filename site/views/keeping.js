// Keeps the working copy of this tab as it changes, and tells when that fails.

import { whenQuiet } from "../base/frame.js";
import { choices } from "../model/view.js";
import { idle } from "../model/work.js";
import { download } from "./file.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/kept.js").Shelf} Shelf
 * @typedef {import("./notice.js").Notices} Notices
 * @typedef {import("../engine/wire.js").Preset} Preset
 */

/**
 * @param {Store} store
 * @param {Shelf} shelf
 * @param {import("../model/work.js").Found} found
 * @param {Notices} notices
 * @param {Preset[]} presets
 * @param {{saveFile: () => void, openKept: () => void}} acts
 */
export function keepWork(store, shelf, found, notices, presets, acts) {
  let due = false; // something has changed since it was last written
  let lost = false; // and could not be written

  function write() {
    if (!due) return;
    due = false;
    const { plan, preset, kept, view } = store.get();
    const held = kept ? shelf.read("kept", kept.id) : null;
    const known = [presets.find((p) => p.name === preset)?.plan, held && "plan" in held ? held.plan : null];
    const outcome = shelf.write("working", found.tab, { plan, preset, kept: kept ? { id: kept.id, stamp: kept.stamp } : null, title: String(plan.title ?? ""), idle: idle(plan, known), view: choices(view) });
    lost = !outcome.ok && !idle(plan, known);
    if (outcome.ok) {
      notices.clear("storage");
      return;
    }
    if (!lost) return;
    const why = outcome.why === "full" ? "This browser's storage for the page is full" : "This browser lets the page keep nothing";
    notices.tell("storage", `${why}: the plan stays on the page, but would be gone after a reload.`, {
      wrong: true,
      acts: [{ label: "Save file", act: acts.saveFile }, ...(outcome.why === "full" ? [{ label: "Kept plans", act: acts.openKept }] : [])],
    });
  }
  const later = whenQuiet(300, write);

  let chosen = JSON.stringify(choices(store.get().view));
  const unsubscribe = store.subscribe((state, changed) => {
    const now = changed.has("view") ? JSON.stringify(choices(state.view)) : chosen;
    if (now === chosen && !["plan", "preset", "kept"].some((k) => changed.has(k))) return;
    chosen = now;
    due = true;
    later();
  });

  /** @param {BeforeUnloadEvent} e */
  function ask(e) {
    write();
    if (lost) e.preventDefault();
  }
  window.addEventListener("beforeunload", ask);
  window.addEventListener("pagehide", write);
  document.addEventListener("visibilitychange", write);

  if (found.unreadable !== "") {
    notices.tell("unreadable", "The plan that this browser kept for this page cannot be read; the page begins with a healthy adult. Its text is still there.", {
      wrong: true, acts: [{ label: "Save its text", act: () => download(new Blob([found.unreadable], { type: "text/plain" }), "unreadable-plan.txt") }, { label: "Kept plans", act: acts.openKept }],
    });
  }
  return {
    write,
    destroy() {
      unsubscribe();
      window.removeEventListener("beforeunload", ask);
      window.removeEventListener("pagehide", write);
      document.removeEventListener("visibilitychange", write);
    },
  };
}

