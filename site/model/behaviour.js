// How a word on a map looks: a colour, a pattern of strokes and a place in the legend,
// by what it means, so that the same behaviour looks the same on every map and in
// whatever order results come in. Holds no DOM.

/**
 * @typedef {object} Look
 * @property {string} hue name of a colour of the sheet
 * @property {number} strength 0 is paper, 1 the full colour
 * @property {"plain" | "rising" | "falling" | "level" | "upright" | "dots" | "cross" | "lattice"} pattern
 */

const WENCKEBACH = /** @type {Look["pattern"][]} */ (["rising", "level", "falling", "dots", "upright"]);

/** What no plan can be made for. @type {Look} */
export const REFUSED = { hue: "ink-soft", strength: 0.12, pattern: "cross" };

/** Where a run gives no number. @type {Look} */
export const NONE = { hue: "ink-soft", strength: 0.04, pattern: "dots" };

/** @type {Record<string, Look>} */
const KNOWN = {
  none: { hue: "atrium", strength: 0.12, pattern: "plain" },
  nothing: { hue: "atrium", strength: 0.12, pattern: "plain" },
  brief: { hue: "node", strength: 0.3, pattern: "dots" },
  ended: { hue: "node", strength: 0.5, pattern: "rising" },
  sustained: { hue: "alarm", strength: 0.6, pattern: "falling" },
};

/**
 * @param {string} outcome
 * @param {string} word
 * @param {number} place among the words of the map, for words without a look of their own
 * @returns {Look}
 */
export function lookOf(outcome, word, place) {
  if (outcome === "pattern") return patternLook(word);
  if (KNOWN[word]) return KNOWN[word];
  const hues = ["his", "device", "node", "alarm", "ventricle"];
  return { hue: hues[place % hues.length], strength: 0.3 + 0.2 * (Math.floor(place / hues.length) % 2), pattern: WENCKEBACH[place % WENCKEBACH.length] };
}

/** @param {string} word @returns {Look} */
function patternLook(word) {
  const [p, q] = word.split(":").map(Number);
  if (word === "varies") return { hue: "ink-soft", strength: 0.22, pattern: "lattice" };
  if (!Number.isFinite(q)) return NONE;
  if (p === 1 && q === 1) return { hue: "atrium", strength: 0.2, pattern: "plain" };
  if (q === 0) return { hue: "alarm", strength: 0.5, pattern: "cross" };
  if (q === 1) return { hue: "his", strength: Math.min(0.7, 0.18 + 0.13 * p), pattern: p % 2 === 0 ? "upright" : "level" };
  if (p === q + 1) return { hue: "node", strength: Math.max(0.16, 0.62 - 0.1 * (q - 2)), pattern: WENCKEBACH[q % WENCKEBACH.length] };
  return { hue: "device", strength: 0.36, pattern: WENCKEBACH[(p + q) % WENCKEBACH.length] };
}

/**
 * The order of words in a legend: patterns by the share that is conducted, the most
 * first; other words by how grave they are, then by name.
 * @param {string} a
 * @param {string} b
 */
export function byMeaning(a, b) {
  return rank(a) - rank(b) || (a < b ? -1 : a > b ? 1 : 0);
}

/** @param {string} w */
function rank(w) {
  const [p, q] = w.split(":").map(Number);
  if (Number.isFinite(q) && p > 0) return -q / p;
  const at = ["none", "nothing", "brief", "ended", "sustained"].indexOf(w);
  return at < 0 ? 10 : at;
}

/**
 * What a word says, for people.
 * @param {string} outcome
 * @param {string} word
 */
export function saying(outcome, word) {
  if (word === "") return "nothing";
  if (outcome !== "pattern") return word.replaceAll("_", " ");
  if (word === "varies") return "varies";
  if (word === "none") return "few P waves";
  return word.endsWith(":0") ? `${word}, none` : word;
}
