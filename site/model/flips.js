// Where an outcome flips while something is moved. Holds no DOM.

/** @typedef {import("../engine/wire.js").Finding} Finding */

/**
 * @typedef {object} Flip
 * @property {number} low value of the plan on one side
 * @property {number} high and on the other
 * @property {string} below the outcome up to low
 * @property {string} above the outcome from high
 * @property {boolean} exact low and high are one step apart
 */

/** What a timeline comes to, apart from its numbers. @param {Finding[]} findings */
export function outcome(findings) {
  return findings.map((f) => `${f.slug}${f.ratio ? ` ${f.ratio}` : ""}`).sort().join("; ");
}

/**
 * What sets one outcome apart from another, in the engine's words, without the numbers
 * that follow a colon or a bracket.
 * @param {Finding[]} own
 * @param {Finding[]} other
 */
export function difference(own, other) {
  const key = (/** @type {Finding} */ f) => f.slug + (f.ratio ?? "");
  const there = new Set(other.map(key));
  const fresh = own.filter((f) => !there.has(key(f)));
  if (fresh.length > 0) return brief(fresh[0].text);
  const kept = new Set(own.map(key));
  const gone = other.filter((f) => !kept.has(key(f)));
  return gone.length > 0 ? `without: ${brief(gone[0].text)}` : "";
}

const LONGEST = 46;

/** @param {string} text */
function brief(text) {
  const short = text.split(/: |[;(]|, /)[0].trim();
  return short.length > LONGEST ? `${short.slice(0, LONGEST - 1)}…` : short;
}

/**
 * The outcomes seen so far in one move, by value, and the places between them.
 */
export function flipLog() {
  /** @type {{value: number, outcome: string, findings: Finding[]}[]} */
  let seen = [];
  /** @type {Map<string, Flip>} */
  const exact = new Map();
  const key = (/** @type {number} */ a, /** @type {number} */ b) => `${a} ${b}`;
  return {
    /** @param {number} value @param {Finding[]} findings */
    note(value, findings) {
      seen = [...seen.filter((s) => s.value !== value), { value, outcome: outcome(findings), findings }].sort((a, b) => a.value - b.value);
    },

    /** @param {number} low @param {number} high @param {number} a @param {number} b where it is exactly */
    found(low, high, a, b) {
      const flip = this.flips().find((f) => f.low === low && f.high === high);
      if (flip) exact.set(key(low, high), { ...flip, low: a, high: b, exact: true });
    },

    /** @returns {Flip[]} in order of value */
    flips() {
      const out = [];
      for (let i = 1; i < seen.length; i++) {
        const [a, b] = [seen[i - 1], seen[i]];
        if (a.outcome === b.outcome) continue;
        out.push({ low: a.value, high: b.value, below: difference(a.findings, b.findings), above: difference(b.findings, a.findings), exact: false });
      }
      return out;
    },

    /** The same, as near as they are known. @returns {Flip[]} */
    known() {
      return this.flips().map((f) => exact.get(key(f.low, f.high)) ?? f);
    },
  };
}

/** @typedef {ReturnType<typeof flipLog>} FlipLog */
