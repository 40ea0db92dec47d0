// The outcomes of a sweep as they come in, in any order: columns by outcome, entries by
// point, points numbered x fastest. Holds no DOM.

/** @typedef {{name: string, label: string, unit: string, values: any[]}} AxisHead */
/** @typedef {{title: string, x: AxisHead, y: AxisHead | null, seeds: number[], of: number}} Head */
/** @typedef {{list: string[], at: number[]}} Words */
/** @typedef {{name: string, label: string, unit?: string, kind: "number" | "word" | "words", number?: (number | null)[], n?: number[], min?: (number | null)[], max?: (number | null)[], words?: Words, counts?: [number, number][][]}} Column */
/** @typedef {{points: number[], refused: Words, columns: Column[]}} Slice */
/** @typedef {{name: string, label: string, unit: string, kind: "number" | "word" | "words"}} About */
/**
 * An outcome at a point.
 * @typedef {object} Entry
 * @property {string} word the commonest, or all of them where there may be several; "" for none
 * @property {number | null} number mean over the seeds
 * @property {number} n runs that gave it
 * @property {number} min
 * @property {number} max
 * @property {[string, number][]} counts
 */

/** @typedef {ReturnType<typeof createGrid>} Grid */

const STRIDES = [16, 8, 4, 2, 1];

/**
 * The points of a grid, coarse to fine: those of every sixteenth row and column first.
 * @param {number} nx
 * @param {number} ny
 * @returns {number[]}
 */
export function coarseToFine(nx, ny) {
  /** @type {number[]} */
  const out = [];
  STRIDES.forEach((s, k) => {
    const coarser = k === 0 ? 0 : STRIDES[k - 1];
    for (let y = 0; y < ny; y += s) {
      for (let x = 0; x < nx; x += s) {
        if (coarser === 0 || x % coarser !== 0 || y % coarser !== 0) out.push(y * nx + x);
      }
    }
  });
  return out;
}

/** @param {Head} head */
export function createGrid(head) {
  const nx = head.x.values.length;
  const ny = head.y ? head.y.values.length : 1;
  /** @type {(Map<string, Entry> | null)[]} */
  const cells = new Array(nx * ny).fill(null);
  /** @type {(string | undefined)[]} */
  const refused = new Array(nx * ny);
  /** @type {About[]} */
  let outcomes = [];
  let done = 0;

  /** @param {Column} c @param {number} i @returns {Entry} */
  function entry(c, i) {
    if (c.kind === "number") {
      const number = c.number?.[i] ?? null;
      return { word: "", number, n: number === null ? 0 : (c.n?.[i] ?? 1), min: c.min?.[i] ?? number ?? NaN, max: c.max?.[i] ?? number ?? NaN, counts: [] };
    }
    const list = c.words?.list ?? [];
    const at = c.words?.at[i] ?? -1;
    /** @type {[string, number][]} */
    const counts = c.counts ? c.counts[i].map(([w, n]) => [list[w], n]) : at < 0 ? [] : [[list[at], 1]];
    const word = c.kind === "word" ? (at < 0 ? "" : list[at]) : counts.map(([w]) => w).sort().join(", ") || "nothing";
    return { word, number: null, n: counts[0]?.[1] ?? 0, min: NaN, max: NaN, counts };
  }

  return {
    head, nx, ny, of: nx * ny,
    done: () => done,
    outcomes: () => outcomes,

    /** @param {Slice} slice */
    put(slice) {
      outcomes = slice.columns.map(({ name, label, unit = "", kind }) => ({ name, label, unit, kind }));
      slice.points.forEach((p, i) => {
        if (cells[p] === null) done++;
        cells[p] = new Map(slice.columns.map((c) => [c.name, entry(c, i)]));
        const why = slice.refused.at[i];
        refused[p] = why < 0 ? undefined : slice.refused.list[why];
      });
    },

    /** Whether a point has been run. @param {number} p */
    has: (p) => cells[p] !== null,

    /** Why the plan of a point cannot be. @param {number} p */
    refused: (p) => refused[p],

    /** @param {number} p @param {string} outcome @returns {Entry | undefined} */
    at: (p, outcome) => (refused[p] === undefined ? cells[p]?.get(outcome) : undefined),

    /** The point that stands for another until that has been run; −1 for none. @param {number} p */
    stand(p) {
      if (cells[p] !== null) return p;
      const x = p % nx;
      const y = (p - x) / nx;
      for (let k = STRIDES.length - 1; k >= 0; k--) {
        const s = STRIDES[k];
        const q = (y - (y % s)) * nx + (x - (x % s));
        if (cells[q] !== null) return q;
      }
      return -1;
    },

    /** The values of a point, x and then y. @param {number} p */
    values: (p) => (head.y ? [head.x.values[p % nx], head.y.values[Math.floor(p / nx)]] : [head.x.values[p]]),
  };
}

/**
 * A sweep as lines of comma-separated values: axes, outcomes, why a plan cannot be.
 * The columns are those of the command line.
 * @param {Grid} grid
 */
export function writeCSV(grid) {
  const { head } = grid;
  const many = head.seeds.length > 1;
  const outcomes = grid.outcomes();
  const names = [head.x.name, ...(head.y ? [head.y.name] : [])];
  for (const o of outcomes) names.push(o.name, ...(many && o.kind === "number" ? [`${o.name}_min`, `${o.name}_max`] : []));
  const lines = [[...names, "refused"]];
  for (let p = 0; p < grid.of; p++) {
    if (!grid.has(p)) continue;
    const line = grid.values(p).map(plain);
    for (const o of outcomes) {
      const e = grid.at(p, o.name);
      if (o.kind !== "number") line.push(e === undefined ? "" : o.kind === "word" ? e.word : e.counts.map(([w]) => w).join(" "));
      else {
        const has = e !== undefined && e.number !== null;
        line.push(has ? String(e.number) : "");
        if (many) line.push(has ? String(e.min) : "", has ? String(e.max) : "");
      }
    }
    lines.push([...line, grid.refused(p) ?? ""]);
  }
  return `${lines.map((l) => l.map(quoted).join(",")).join("\n")}\n`;
}

/** @param {any} v */
const plain = (v) => (typeof v === "string" ? v : JSON.stringify(v));

/** @param {string} text */
const quoted = (text) => (/[",\n\r]/.test(text) || text.startsWith(" ") ? `"${text.replaceAll('"', '""')}"` : text);
