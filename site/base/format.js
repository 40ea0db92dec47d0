// Numbers as people read them. Imports nothing.

/**
 * A number with at most the given digits after the point and no empty ones.
 * @param {number} v
 * @param {number} [digits]
 */
export function num(v, digits = 2) {
  if (!Number.isFinite(v)) return "–";
  const s = v.toFixed(digits);
  const short = s.includes(".") ? s.replace(/\.?0+$/, "") : s;
  return (short === "-0" ? "0" : short).replace("-", "−");
}

/**
 * An instant as seconds of the strip: "4.215 s".
 * @param {number} ms
 */
export function seconds(ms) {
  return `${(ms / 1000).toFixed(3)} s`;
}

/**
 * @param {number} n
 * @param {string} one
 * @param {string} [many]
 */
export function count(n, one, many = `${one}s`) {
  return `${n} ${n === 1 ? one : many}`;
}

/**
 * What a typed text stands for: a number where it reads as one, else the text,
 * which the engine then refuses in its own words.
 * @param {string} text
 * @returns {number | string | undefined} undefined for an empty text
 */
export function typed(text) {
  const t = text.trim().replace("−", "-").replace(/^([+-]?\d+),(\d+)$/, "$1.$2");
  if (t === "") return undefined;
  return /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(t) ? Number(t) : text.trim();
}

/**
 * Words of a plan's name: "av_node" becomes "av node".
 * @param {string} name
 */
export function words(name) {
  return name.replaceAll("_", " ");
}
