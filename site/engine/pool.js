// Several engines beside each other, for work that comes in many small parts: each
// worker has an instance of its own. A request goes to whichever is free; replies come
// in any order. A worker that fails is replaced, and the request is told why.

import { Fault } from "./client.js";

/** @typedef {ReturnType<typeof startPool>} Pool */
/** @typedef {{number: number, op: string, args: any, resolve: (json: any) => void, reject: (err: Error) => void}} Task */
/** @typedef {{worker: Worker, task: Task | null}} Hand */

/** How many engines to run: one core is left for the page, where there are several. */
export const usualSize = () => Math.max(1, (navigator.hardwareConcurrency || 2) - 1);

/**
 * @param {URL} url of the worker's script
 * @param {number} size
 */
export function startPool(url, size) {
  /** @type {Hand[]} */
  const hands = [];
  /** @type {Task[]} */
  let waiting = [];
  let last = 0;

  function hire() {
    /** @type {Hand} */
    const hand = { worker: new Worker(url), task: null };
    hand.worker.onmessage = (e) => receive(hand, e.data);
    hand.worker.onerror = (e) => {
      e.preventDefault();
      fail(hand, new Fault(e.message || "the engine could not be started"));
    };
    hands.push(hand);
    return hand;
  }

  /** @param {Hand} hand */
  function dismiss(hand) {
    hand.worker.terminate();
    hands.splice(hands.indexOf(hand), 1);
  }

  /** @param {Hand} hand @param {{number: number, json?: string, fault?: string}} reply */
  function receive(hand, reply) {
    if (reply.fault !== undefined) return fail(hand, new Fault(reply.fault));
    const { task } = hand;
    if (!task || task.number !== reply.number) return;
    hand.task = null;
    task.resolve(JSON.parse(reply.json ?? "null"));
    next();
  }

  /** @param {Hand} hand @param {Fault} fault */
  function fail(hand, fault) {
    if (!hands.includes(hand)) return;
    const { task } = hand;
    dismiss(hand);
    task?.reject(fault);
    if (task) next();
  }

  function next() {
    while (waiting.length > 0) {
      const hand = hands.find((h) => h.task === null) ?? (hands.length < size ? hire() : null);
      if (!hand) return;
      const task = /** @type {Task} */ (waiting.shift());
      hand.task = task;
      hand.worker.postMessage({ number: task.number, op: task.op, json: JSON.stringify(task.args) });
    }
  }

  return {
    size: () => size,

    /** Loads the engines, so that the first request need not wait for it. */
    warm() {
      while (hands.length < size) hire();
    },

    /** @param {number} to how many engines from now on */
    resize(to) {
      size = Math.max(1, to);
      for (const hand of [...hands]) if (hands.length > size && hand.task === null) dismiss(hand);
    },

    /**
     * @param {string} op
     * @param {any} args
     * @returns {Promise<any>} what the engine says; a Fault where it failed
     */
    ask(op, args) {
      return new Promise((resolve, reject) => {
        last++;
        waiting.push({ number: last, op, args, resolve, reject });
        next();
      });
    },

    stop() {
      for (const hand of [...hands]) dismiss(hand);
      waiting = [];
    },
  };
}
