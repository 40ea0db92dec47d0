// Whether the sheet is light or dark: the person's choice, else the system's. Imports nothing.

const KEY = "escapement.sheet";

export function wantsDark() {
  let chosen = null;
  try {
    chosen = localStorage.getItem(KEY);
  } catch {
    // Nothing may be kept: the system's choice holds.
  }
  return chosen ? chosen === "dark" : matchMedia("(prefers-color-scheme: dark)").matches;
}

/** @param {boolean} dark */
export function keepDark(dark) {
  try {
    localStorage.setItem(KEY, dark ? "dark" : "light");
  } catch {
    // The choice lasts as long as the page.
  }
}
