// The sheet's colours and the fills of a map made of them, kept until the sheet turns
// light or dark: a fill costs a canvas.

/** @typedef {import("../model/behaviour.js").Look} Look */

/**
 * @typedef {object} Inks
 * @property {string} key of the sheet they belong to
 * @property {(name: string) => string} colour of the sheet by name
 * @property {(look: Look) => CanvasPattern | string} fill
 */

/** @type {Inks | null} */
let kept = null;

/** @returns {Inks} */
export function inksOfSheet() {
  const root = document.documentElement;
  const key = `${root.dataset.sheet} ${devicePixelRatio}`;
  if (kept?.key === key) return kept;
  const css = getComputedStyle(root);
  /** @type {Map<string, string>} */
  const colours = new Map();
  const colour = (/** @type {string} */ name) => {
    let c = colours.get(name);
    if (c === undefined) colours.set(name, (c = css.getPropertyValue(`--${name}`).trim()));
    return c;
  };
  const g = /** @type {CanvasRenderingContext2D} */ (document.createElement("canvas").getContext("2d"));
  /** @type {Map<string, CanvasPattern | string>} */
  const fills = new Map();
  kept = {
    key, colour,
    fill(look) {
      const name = `${look.hue} ${look.strength} ${look.pattern}`;
      let f = fills.get(name);
      if (f === undefined) fills.set(name, (f = tile(g, look, colour)));
      return f;
    },
  };
  return kept;
}

/** @param {string} hex @param {string} on @param {number} share */
function mix(hex, on, share) {
  const read = (/** @type {string} */ h) => [1, 3, 5].map((i) => parseInt(h.slice(i, i + 2), 16));
  const [a, b] = [read(hex), read(on)];
  return `rgb(${a.map((v, i) => Math.round(v * share + b[i] * (1 - share))).join(" ")})`;
}

const TILE = 10; // pixels of the page

/** @param {CanvasRenderingContext2D} g @param {Look} look @param {(name: string) => string} colour */
function tile(g, look, colour) {
  const hue = colour(look.hue);
  const paper = colour("paper");
  const ground = mix(hue, paper, look.strength * 0.8);
  if (look.pattern === "plain") return ground;
  const scale = devicePixelRatio || 1;
  const canvas = new OffscreenCanvas(TILE * scale, TILE * scale);
  const t = /** @type {OffscreenCanvasRenderingContext2D} */ (canvas.getContext("2d"));
  t.scale(scale, scale);
  t.fillStyle = ground;
  t.fillRect(0, 0, TILE, TILE);
  t.strokeStyle = t.fillStyle = mix(hue, paper, Math.min(1, look.strength + 0.3));
  t.lineWidth = 1.2;
  t.beginPath();
  const stroke = (/** @type {number[]} */ ...p) => {
    t.moveTo(p[0], p[1]);
    t.lineTo(p[2], p[3]);
  };
  const m = TILE / 2;
  if (look.pattern === "rising" || look.pattern === "lattice") for (const o of [-TILE, 0, TILE]) stroke(o, TILE, o + TILE, 0);
  if (look.pattern === "falling" || look.pattern === "lattice") for (const o of [-TILE, 0, TILE]) stroke(o, 0, o + TILE, TILE);
  if (look.pattern === "level") stroke(0, m, TILE, m);
  if (look.pattern === "upright") stroke(m, 0, m, TILE);
  if (look.pattern === "cross") {
    stroke(m - 2.5, m - 2.5, m + 2.5, m + 2.5);
    stroke(m - 2.5, m + 2.5, m + 2.5, m - 2.5);
  }
  t.stroke();
  if (look.pattern === "dots") {
    t.beginPath();
    t.arc(m, m, 1.3, 0, 7);
    t.fill();
  }
  const p = /** @type {CanvasPattern} */ (g.createPattern(canvas, "repeat"));
  p.setTransform(new DOMMatrix().scale(1 / scale));
  return p;
}

