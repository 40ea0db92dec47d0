// The device's settings as a table in open nomenclature: saved to a file, or read
// from one. What a table does not state stays unstated.

import { el, fill } from "../base/dom.js";
import { count } from "../base/format.js";

/** @typedef {import("../model/store.js").Store} Store */

/**
 * @param {Store} store
 * @param {(op: import("../engine/client.js").Op, args: any) => Promise<any>} ask
 */
export function tableView(store, ask) {
  const file = el("input", { type: "file", accept: ".csv,text/csv", hidden: true, "aria-label": "Table of settings", onchange: read });
  const said = el("p", { class: "table-said", role: "status" });
  const node = el("div", { class: "table" },
    el("button", { type: "button", onclick: save }, "Save table"),
    el("button", { type: "button", onclick: () => file.click() }, "Read table"), file, said);

  async function save() {
    const reply = await ask("table", { plan: store.get().plan });
    if (!reply) return;
    const { table, fault } = reply.json;
    if (fault) {
      tell(fault, true);
      return;
    }
    const url = URL.createObjectURL(new Blob([table], { type: "text/csv" }));
    el("a", { href: url, download: "settings.csv" }).click();
    URL.revokeObjectURL(url);
    tell("Saved as settings.csv; what the plan does not state stands there as not stated.", false);
  }

  async function read() {
    const chosen = file.files?.[0];
    file.value = "";
    if (!chosen) return;
    const reply = await ask("table", { plan: store.get().plan, read: await chosen.text() });
    if (!reply) return;
    const { plan, missing = [], unknown = [], fault } = reply.json;
    if (fault) {
      tell(`${chosen.name} was not read. ${fault}`, true);
      return;
    }
    store.edit(plan, "");
    tell(`${chosen.name} was read; it does not state ${count(missing.length, "setting")}${unknown.length ? `, and ${count(unknown.length, "row")} in it ${unknown.length === 1 ? "is" : "are"} not known: ${unknown.join("; ")}` : ""}.`, false);
  }

  /** @param {string} text @param {boolean} wrong */
  function tell(text, wrong) {
    said.classList.toggle("wrong", wrong);
    fill(said, text);
  }

  return node;
}
