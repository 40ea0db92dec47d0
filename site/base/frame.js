// The page's only animation-frame scheduler. Imports nothing.

/** @type {Set<() => void>} */
const waiting = new Set();
let asked = false;

/**
 * Runs a task once before the next frame, however often it was asked for.
 * @param {() => void} task
 */
export function nextFrame(task) {
  waiting.add(task);
  if (asked) return;
  asked = true;
  requestAnimationFrame(() => {
    asked = false;
    const tasks = [...waiting];
    waiting.clear();
    for (const run of tasks) run();
  });
}

/**
 * Runs a task when it has not been asked for again for the given time.
 * @param {number} ms
 * @param {() => void} task
 */
export function whenQuiet(ms, task) {
  let timer = 0;
  return () => {
    clearTimeout(timer);
    timer = window.setTimeout(task, ms);
  };
}

/** Whether the person asked for less motion. */
export function calm() {
  return matchMedia("(prefers-reduced-motion: reduce)").matches;
}
