// The working copy of a tab: saved by itself, found again after a reload, and never
// shared with another tab that is alive. Holds no DOM.

import { EMPTY } from "./document.js";
import { fresh } from "./kept.js";

/**
 * @typedef {import("./path.js").Plan} Plan
 * @typedef {import("./kept.js").Shelf} Shelf
 * @typedef {import("./kept.js").Kept} Kept
 */

/**
 * @typedef {object} Found
 * @property {string} tab name of this tab's working copy
 * @property {Kept | null} work what it holds
 * @property {string} unreadable text of a copy that could not be read, or ""
 */

const TAB = "escapement.tab";
const lockName = (/** @type {string} */ tab) => `escapement.working.${tab}`;

/**
 * Finds the working copy that this tab goes on with: its own after a reload, else
 * the newest that no living tab holds. A copy of a tab gets a working copy of its own.
 * @param {Shelf} shelf
 * @param {() => Storage} session throws where nothing may be kept
 * @param {LockManager | undefined} locks
 * @param {Plan | null} linked the plan that the tab opens with, by a link: it takes up no other
 * @returns {Promise<Found>}
 */
export async function takeUp(shelf, session, locks, linked) {
  const alone = linked !== null;
  const own = remembered(session);
  const mine = own !== "" && (await hold(locks, own));
  let unreadable = "";
  let work = own !== "" ? shelf.read("working", own) : null;
  if (work && "raw" in work) {
    unreadable = work.raw;
    work = null;
  }
  let tab = mine && unreadable === "" && !(alone && work && !idle(linked, [work.plan])) ? own : "";
  if (own === "" && !alone) {
    const held = locks ? new Set((await locks.query()).held?.map((l) => l.name)) : null;
    const left = shelf.list("working").filter((w) => !held?.has(lockName(w.id)));
    for (const w of left) {
      if ("raw" in w) continue;
      if (!work && !held) work = w; // whether it is in use cannot be known: go on with a copy
      else if (!work && (await hold(locks, w.id))) {
        work = w;
        tab = w.id;
      } else if (held && w.idle) shelf.remove("working", w.id);
    }
  }
  if (tab === "") {
    tab = fresh();
    await hold(locks, tab);
  }
  remember(session, tab);
  return { tab, work: alone ? null : work, unreadable };
}

/**
 * Whether a plan is nothing that anyone would miss: a healthy adult, a preset or a
 * kept plan as it stands.
 * @param {Plan} plan
 * @param {(Plan | null | undefined)[]} known
 */
export function idle(plan, known) {
  const text = JSON.stringify(plan);
  return [EMPTY, ...known].some((k) => k === plan || (k && JSON.stringify(k) === text));
}

/**
 * Names of the working copies that living tabs hold.
 * @param {LockManager | undefined} locks
 */
export async function living(locks) {
  const held = (await locks?.query())?.held ?? [];
  return new Set(held.map((l) => (l.name ?? "").slice(lockName("").length)));
}

/**
 * Holds a working copy for as long as the tab lives.
 * @param {LockManager | undefined} locks
 * @param {string} tab
 * @returns {Promise<boolean>}
 */
function hold(locks, tab) {
  if (!locks) return Promise.resolve(true);
  return new Promise((resolve) => {
    locks.request(lockName(tab), { ifAvailable: true }, (lock) => {
      resolve(lock !== null);
      return lock ? new Promise(() => {}) : undefined;
    }).catch(() => resolve(true));
  });
}

/** @param {() => Storage} session */
function remembered(session) {
  try {
    return session().getItem(TAB) ?? "";
  } catch {
    return "";
  }
}

/** @param {() => Storage} session @param {string} tab */
function remember(session, tab) {
  try {
    session().setItem(TAB, tab);
  } catch {
    // A browser that keeps nothing: the page works without.
  }
}
