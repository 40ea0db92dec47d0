// What the engine's function answers, as types. The Go side is wasm/live.

/**
 * @typedef {object} Field one value of the plan; see engine/plan
 * @property {string} path
 * @property {string} label
 * @property {string} unit
 * @property {"number" | "switch" | "choice" | "pattern" | "list" | "mode" | "any" | "group"} kind
 * @property {number} min
 * @property {number} max
 * @property {number | null} default null where it is left out
 * @property {{low: number, high: number} | null} normal
 * @property {string} [word] default of a choice or a mode
 * @property {boolean} [on] default of a switch
 * @property {boolean} [nullable]
 * @property {string} [null] what null means
 * @property {boolean} [is_null] null is the default
 * @property {string[]} [choices]
 * @property {Record<string, string>} [names] of the choices, for people
 * @property {string} [source]
 * @property {string} [help]
 * @property {boolean} [curve]
 * @property {boolean} [advanced]
 */

/** @typedef {{name: string, title: string, note: string, plan: any}} Preset */
/** @typedef {{name: string, label: string}} SiteName */
/** @typedef {{name: string, text: string, normal: string, source: string}} Meaning */
/** @typedef {{name: string, label: string, unit?: string, kind: "number" | "word" | "words", help: string, source?: string, slow?: boolean}} Outcome what a run comes to; see engine/plan */

/**
 * @typedef {object} Style
 * @property {string} [stroke]
 * @property {number} [width] mm
 * @property {number[]} [dash] mm
 * @property {string} [fill]
 * @property {number} [size] multiple of the scene's font_mm
 * @property {number} [weight]
 */

/**
 * @typedef {object} Styles
 * @property {string} paper
 * @property {string} ink
 * @property {string} quiet
 * @property {string} device
 * @property {string} warning
 * @property {Record<string, Style>} classes
 */

/**
 * @typedef {object} Catalogue
 * @property {Field[]} fields
 * @property {Preset[]} presets
 * @property {SiteName[]} sites
 * @property {SiteName[]} lanes electrograms and action potentials that a view may show
 * @property {Outcome[]} outcomes of a run, which a sweep may ask for
 * @property {Meaning[]} meanings of sums, intervals, rows of a comparison and findings
 * @property {string[]} modes of pacing, without the letters for rate modulation and multisite pacing
 * @property {{light: Styles, dark: Styles}} styles
 * @property {{plain: number, full: number}} margins_mm what a scene needs beside its time axis
 */

/** @typedef {{path: string, found: string, allowed: string, note: string, text: string}} Diagnosis */
/** @typedef {{text: string, events: number[]}} Clause */

/**
 * @typedef {object} Overview
 * @property {number[]} atrium milliseconds at which a wave in the atria began
 * @property {number[]} ventricle
 * @property {number[]} blocks
 * @property {number[]} stimuli of the plan's interventions
 * @property {number[]} paced_atrium stimuli of the device
 * @property {number[]} paced_ventricle
 * @property {number[]} lost those of the device that did not capture
 * @property {Trend | null} trend where there are too many beats to show each
 * @property {Spot[]} flags where the findings are, in order of time
 */

/** Rates a minute in parts of equal length, 0 where there is none; percent paced. @typedef {{least: number[], mean: number[], most: number[], paced: number[]}} Rates */
/** @typedef {{step_ms: number, atrium: Rates, ventricle: Rates, blocks: number[]}} Trend */
/** @typedef {{finding: number, event: number, t_ms: number, until_ms: number, shape: "block" | "pause" | "premature" | "device" | "rhythm"}} Spot */

/** @typedef {{name: string, label: string, value: number | null, unit: string, normal: [number, number] | null, help: string, source: string}} Measured */
/** @typedef {{slug: string, ratio: string, text: string, events: number[], t_ms: number, note: string, rivals: string[]}} Finding */

/** @typedef {{name: string, label: string, text: string, unit: string, formula: string, numbers: string, source: string}} Sum */
/** @typedef {{name: string, count: number, median_ms: number | null, least_ms: number, longest_ms: number}} Interval */

/**
 * @typedef {object} Device
 * @property {string[]} warnings about the settings
 * @property {Sum[]} arithmetic
 * @property {Measured[]} counted over the strip
 * @property {Interval[]} intervals
 */

/**
 * @typedef {object} Answer
 * @property {string} title
 * @property {string} note
 * @property {Clause[]} statement
 * @property {string[]} warnings
 * @property {Measured[]} measured medians over the strip
 * @property {Finding[]} findings
 * @property {number} events how many
 * @property {number} span_ms
 * @property {string} fingerprint
 * @property {Overview} overview
 * @property {Device | null} device
 */

/** @typedef {{id: number, t_ms: number, text: string}} Line */

/**
 * @typedef {object} Account
 * @property {number} event
 * @property {number} t_ms
 * @property {string} title
 * @property {string[]} sentences
 * @property {string} margin how close it came to going the other way, or ""
 * @property {Line[]} chain the event, then its causes, to the focus or stimulus
 * @property {Line[]} led what it caused directly
 * @property {Linked[]} settings that had a part in it
 * @property {{title: string, sentences: string[], lines: Line[]} | null} not why the device did not follow it
 * @property {string} [against] how it differs from its partner, where two timelines are compared
 */

/** @typedef {{part: string, name: string, before: string, after: string, by: string, sign: "same" | "gone" | "new" | "earlier" | "later" | "altered", place?: string}} ContrastRow */

/**
 * @typedef {object} Contrast
 * @property {string} title of the plan before
 * @property {string} statement
 * @property {string} after title of the present plan
 * @property {number} shared_ms the length that both strips have
 * @property {ContrastRow[]} rows
 * @property {{gone: number, new: number, moved: number, altered: number}} events
 * @property {number} first event at which the two part, 0 for none
 */

/** @typedef {{path: string, label: string, unit: string, value: number}} Linked a setting that had a part in something */

/** @typedef {{event: number, item: number, single: boolean, slug: string, text: string, sentences: string[], lines: Line[]}} Extra */

/** @typedef {{from: number, to: number, slug: string, text: string, passage_ms: [number, number], ah_ms: [number, number]}} Segment */

/**
 * @typedef {object} Scan
 * @property {number} item place in the list of interventions
 * @property {number} from_ms couplings count from here
 * @property {number} last the longest, ms
 * @property {number} done
 * @property {number} of
 * @property {boolean} finished
 * @property {Segment[]} segments
 * @property {{coupling: number, by_ms: number} | null} jump
 * @property {string} fault
 * @property {string} key the plan it holds for
 * @property {string} site
 */

/** @typedef {{from_ms: number, to_ms: number, long: boolean, title: string, sentences: string[], lines: Line[], settings: Linked[]}} Gap */

export {};
