// The plans kept in this browser, by title: keep, open, rename, delete and take the
// deletion back. A plan that another tab kept meanwhile is never written over unasked.

import { el, fill } from "../base/dom.js";
import { count } from "../base/format.js";
import { fileName, titleOf } from "../model/document.js";
import { fresh } from "../model/kept.js";
import { put } from "../model/path.js";
import { living } from "../model/work.js";
import { dialog } from "./dialog.js";
import { download, show } from "./file.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/kept.js").Shelf} Shelf
 * @typedef {import("../model/kept.js").Kept} Kept
 * @typedef {import("../model/kept.js").Unreadable} Unreadable
 * @typedef {import("../model/kept.js").Kind} Kind
 * @typedef {import("./notice.js").Notices} Notices
 */

const MOST_LETTERS = 200; // of a title, as in the plan file

/**
 * @param {Store} store
 * @param {Shelf} shelf
 * @param {string} tab name of this tab's working copy
 * @param {Notices} notices
 */
export function keptDialog(store, shelf, tab, notices) {
  const title = el("input", {
    type: "text", id: "kept-title", maxLength: MOST_LETTERS, autocomplete: "off",
    oninput: () => store.edit(put(store.get().plan, "title", title.value), "type title"), onblur: () => store.settle(),
  });
  const form = el("form", { class: "keep-row", onsubmit: (/** @type {Event} */ e) => { e.preventDefault(); keep(); } },
    el("label", { for: "kept-title" }, "Title"), title, el("button", { type: "submit", id: "keep-now" }, "Keep this plan"));
  const asked = el("div", { class: "asked", role: "alert" });
  const said = el("p", { class: "kept-said", role: "status" });
  const list = el("div", null);
  const box = dialog("Kept plans", "kept", el("p", { class: "hint" }, "Kept in this browser, on this machine. The title is free text: no names of patients."), form, asked, said, list);

  const name = () => titleOf(store.get().plan, store.get().answer).slice(0, MOST_LETTERS);
  const when = (/** @type {number} */ ms) => new Date(ms).toLocaleString("en-GB", { dateStyle: "medium", timeStyle: "short" });

  /** @param {string} text @param {import("./notice.js").Act} [act] */
  function tell(text, act) {
    fill(asked);
    fill(said, text, act && " ", act && el("button", { type: "button", class: "link", onclick: () => act.act() }, act.label));
  }

  /** Keeps the plan under its title; asks where that would write over another's work. */
  function keep() {
    const { kept } = store.get();
    const called = name();
    if (kept && kept.title === called && shelf.read("kept", kept.id)) place(kept.id, kept.stamp);
    else {
      const other = shelf.list("kept").find((k) => !("raw" in k) && k.title === called);
      place(other?.id ?? fresh(), other ? "" : null);
    }
  }

  /** @param {string} id @param {string | null} over stamp that may be written over */
  function place(id, over) {
    const { plan, preset } = store.get();
    const called = name();
    const outcome = shelf.write("kept", id, { title: called, plan, preset }, over);
    if (outcome.ok) {
      store.set({ kept: { id, stamp: outcome.stamp, title: called } });
      tell(`“${called}” is kept.`);
      if (!box.open) notices.tell("kept", `“${called}” is kept in this browser.`);
      fillList();
    } else if (outcome.why === "changed") {
      if (!box.open) openBox();
      fill(said);
      const how = over === "" ? "is kept already" : "was kept anew elsewhere";
      fill(asked, el("p", null, `“${called}” ${how}${outcome.saved ? `, ${when(outcome.saved)}` : ""}. `),
        el("button", { type: "button", id: "keep-replace", onclick: () => place(id, null) }, "Replace it"),
        el("button", { type: "button", id: "keep-both", onclick: () => place(fresh(), null) }, "Keep both"));
      /** @type {HTMLElement | null} */ (asked.querySelector("#keep-both"))?.focus();
    } else {
      if (!box.open) openBox();
      tell(outcome.why === "full" ? "This browser's storage for the page is full: nothing was kept. Delete a plan here, or save this one as a file." : "This browser lets the page keep nothing: save the plan as a file.");
    }
  }

  /** @param {Kind} kind @param {Kept | Unreadable} k */
  function remove(kind, k) {
    const back = shelf.remove(kind, k.id);
    const called = "raw" in k ? "What could not be read" : `“${k.title || "Untitled"}”`;
    tell(`${called} was deleted.`, { label: "Undo", act: () => {
      tell(back() ? `${called} is back.` : `${called} does not fit any more: the storage is full.`);
      fillList();
    } });
    fillList();
    /** @type {HTMLElement | null} */ (said.querySelector("button"))?.focus();
  }

  /** @param {Kept} k @param {HTMLElement} row */
  function rename(k, row) {
    const field = el("input", { type: "text", value: k.title, maxLength: MOST_LETTERS, "aria-label": `New title of ${k.title}` });
    const form2 = el("form", {
      class: "keep-row",
      onsubmit: (/** @type {Event} */ e) => {
        e.preventDefault();
        const called = field.value.trim();
        if (called === "") return;
        const outcome = shelf.write("kept", k.id, { ...k, title: called, plan: { ...k.plan, title: called } }, k.stamp);
        if (!outcome.ok) tell(outcome.why === "changed" ? `“${k.title}” was changed elsewhere meanwhile and kept its title.` : "The new title could not be kept: the storage is full.");
        else {
          const { kept, plan } = store.get();
          if (kept?.id === k.id) {
            store.edit(put(plan, "title", called), "");
            store.set({ kept: { id: k.id, stamp: outcome.stamp, title: called } });
          }
          tell(`“${k.title}” is now “${called}”.`);
        }
        fillList();
      },
      onkeydown: (/** @type {KeyboardEvent} */ e) => {
        if (e.key !== "Escape") return;
        e.preventDefault();
        e.stopPropagation();
        fillList();
      },
    }, field, el("button", { type: "submit" }, "Rename"));
    fill(row, form2);
    field.select();
  }

  /** @param {Kept} k @param {Kind} kind */
  function row(k, kind) {
    const { kept } = store.get();
    const called = k.title || "Untitled";
    const node = el("li", { "data-kept": k.id },
      el("button", {
        type: "button", class: "kept-open", "aria-current": kept?.id === k.id ? "true" : null,
        onclick: () => {
          box.close();
          const from = kind === "kept" ? { id: k.id, stamp: k.stamp, title: k.title } : null;
          show(store, k.plan, { preset: k.preset, kept: from });
          notices.tell("kept", `“${called}” was opened. Undo brings back the plan before.`);
        },
      }, el("strong", null, called), el("span", null, when(k.saved))),
      kind === "kept" && el("button", { type: "button", class: "kept-rename", "aria-label": `Rename ${called}`, onclick: () => rename(k, node) }, "Rename"),
      el("button", { type: "button", class: "kept-delete", "aria-label": `Delete ${called}`, onclick: () => remove(kind, k) }, "Delete"));
    return node;
  }

  /** @param {Unreadable} k @param {Kind} kind */
  function broken(k, kind) {
    return el("li", { class: "broken", "data-kept": k.id },
      el("span", { class: "kept-open" }, el("strong", null, "Cannot be read"), el("span", null, `${count(k.raw.length, "letter")}, as they stand in the storage`)),
      el("button", { type: "button", onclick: () => download(new Blob([k.raw], { type: "text/plain" }), fileName({ title: `unreadable ${k.id}` }, "").replace(".json", ".txt")) }, "Save its text"),
      el("button", { type: "button", class: "kept-delete", onclick: () => remove(kind, k) }, "Delete"));
  }

  async function fillList() {
    const held = await living(navigator.locks);
    const kept = shelf.list("kept");
    const left = shelf.list("working").filter((w) => w.id !== tab && !held.has(w.id) && ("raw" in w || !w.idle));
    /** @param {(Kept | Unreadable)[]} all @param {Kind} kind */
    const rows = (all, kind) => el("ul", { class: "kept-list" }, all.map((k) => ("raw" in k ? broken(k, kind) : row(k, kind))));
    fill(list,
      kept.length > 0 ? rows(kept, "kept") : el("p", { class: "none" }, shelf.usable() ? "Nothing is kept yet." : "This browser lets the page keep nothing: save plans as files."),
      left.length > 0 && el("h3", null, "Left open in a tab that was closed"),
      left.length > 0 && rows(left, "working"));
  }

  async function openBox() {
    title.value = name();
    fill(said);
    fill(asked);
    await fillList();
    if (!box.open) box.showModal();
    title.select();
  }

  window.addEventListener("storage", () => {
    if (box.open) fillList();
  });

  return {
    open: openBox,
    /** Keeps at once what has a title of its own or was kept before; else asks for one. */
    keep() {
      if (store.get().kept || store.get().plan.title) keep();
      else openBox();
    },
  };
}
