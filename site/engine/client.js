// The page's side of the engine: promises over a worker.
//
// One request runs at a time. Behind it waits at most one of each kind: a newer
// one takes the place of an older one, which is told "superseded". Should the
// engine fail, its own words come back as a Fault and a fresh worker is started;
// should a computation run long while a newer one waits, it is ended.

import { note } from "../base/timing.js";

/** The engine failed in a way that no input should make it fail. */
export class Fault extends Error {}

/** @typedef {{json: any, points: Float32Array | null}} Reply */
/** @typedef {"catalogue" | "compute" | "layout" | "account" | "contrast" | "listing" | "table" | "flip" | "extra" | "scan" | "gap" | "search" | "search_plan" | "sense" | "against"} Op */
/**
 * @typedef {object} Request
 * @property {number} number
 * @property {Op} op
 * @property {any} args
 * @property {(reply: Reply | null) => void} resolve null when a newer request took its place
 * @property {(err: Error) => void} reject
 */

/** @typedef {ReturnType<typeof startEngine>} Engine */

const PATIENCE_MS = 1500; // how long a computation may hold up a newer one
const ORDER = /** @type {Op[]} */ (["catalogue", "compute", "layout", "account", "contrast", "listing", "table", "extra", "gap", "flip", "scan", "search_plan", "search", "sense", "against"]);

/**
 * @param {URL} url of the worker's script
 * @param {(busy: boolean) => void} [onBusy]
 */
export function startEngine(url, onBusy = () => {}) {
  /** @type {Worker | null} */
  let worker = null;
  /** @type {Request | null} */
  let running = null;
  let since = 0;
  /** @type {Map<Op, Request>} */
  const waiting = new Map();
  let last = 0;
  let patience = 0;

  /** Starts a worker where none lives: at the first request, and at the first after a fault. */
  function living() {
    if (worker) return worker;
    const w = new Worker(url);
    w.onmessage = (e) => receive(e.data);
    w.onerror = (e) => {
      e.preventDefault();
      fail(new Fault(e.message || "the engine could not be started"));
    };
    worker = w;
    return w;
  }

  function end() {
    worker?.terminate();
    worker = null;
  }

  /** @param {{number: number, json?: string, points?: Float32Array, ms?: number, fault?: string, dead?: boolean}} reply */
  function receive(reply) {
    if (reply.fault !== undefined) {
      fail(new Fault(reply.fault));
      return;
    }
    const r = running;
    if (!r || reply.number !== r.number) return; // stale
    running = null;
    const came = performance.now();
    const json = JSON.parse(reply.json ?? "null");
    if (r.op === "compute") {
      note("engine", reply.ms ?? 0);
      note("compute", json?.answer?.took_ms ?? 0);
      note("transfer", came - since - (reply.ms ?? 0));
      note("read", performance.now() - came);
    }
    r.resolve({ json, points: reply.points ?? null });
    next();
  }

  /** @param {Fault} fault */
  function fail(fault) {
    end();
    const r = running;
    running = null;
    r?.reject(fault);
    next();
  }

  function next() {
    clearTimeout(patience);
    if (running) return;
    for (const op of ORDER) {
      const r = waiting.get(op);
      if (!r) continue;
      waiting.delete(op);
      running = r;
      since = performance.now();
      living().postMessage({ number: r.number, op: r.op, json: JSON.stringify(r.args ?? {}) });
      break;
    }
    onBusy(running !== null);
  }

  /** Ends a computation that keeps a newer one waiting too long. */
  function impatient() {
    if (running?.op !== "compute" || !waiting.has("compute")) return;
    const left = PATIENCE_MS - (performance.now() - since);
    clearTimeout(patience);
    if (left > 0) {
      patience = window.setTimeout(impatient, left);
      return;
    }
    const r = running;
    running = null;
    end();
    r.resolve(null);
    next();
  }

  living(); // loads while the page is being built

  return {
    /**
     * @param {Op} op
     * @param {any} [args]
     * @returns {Promise<Reply | null>} null when a newer request of the kind took its place
     */
    ask(op, args) {
      return new Promise((resolve, reject) => {
        last++;
        waiting.get(op)?.resolve(null);
        waiting.set(op, { number: last, op, args, resolve, reject });
        if (running) impatient();
        else next();
      });
    },
    stop() {
      end();
      running?.resolve(null);
      for (const r of waiting.values()) r.resolve(null);
      waiting.clear();
    },
  };
}
