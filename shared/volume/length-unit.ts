const PREFIXES: ReadonlyMap<string, number> = new Map([
  ["pico", 1e-9],
  ["nano", 1e-6],
  ["micro", 1e-3],
  ["milli", 1],
  ["centi", 10],
  ["deci", 100],
  ["", 1000],
]);

const SYMBOLS: ReadonlyMap<string, number> = new Map([
  ["nm", 1e-6],
  ["um", 1e-3],
  ["\u00b5m", 1e-3], // micro sign
  ["\u03bcm", 1e-3], // Greek mu
  ["mm", 1],
  ["cm", 10],
  ["m", 1000],
]);

/** Words that stand for themselves in any letter case. */
const WORDS: ReadonlyMap<string, number> = new Map([
  ["micron", 1e-3],
  ["microns", 1e-3],
  ["inch", 25.4],
  ["inches", 25.4],
  ["angstrom", 1e-7],
]);

const METRE = /^(pico|nano|micro|milli|centi|deci|)(?:metre|meter)s?$/;

/**
 * Millimetres in one of the named length unit; null when the word is empty or no length known here. Accepts symbols (`um`,
 * micro sign or Greek mu, `mm` ...), `micron`, and spelled-out metres with either ending; letter case counts for symbols only.
 * @source UDUNITS-2 names as OME-Zarr asks for; SI symbols and words as NRRD headers carry them.
 */
export function mmPerUnit(word: string | null | undefined): number | null {
  const symbol = word?.trim() ?? "";
  const lower = symbol.toLowerCase();
  const prefix = METRE.exec(lower)?.[1];
  return SYMBOLS.get(symbol) ?? WORDS.get(lower) ?? (prefix === undefined ? null : PREFIXES.get(prefix)!);
}

/** `value` of a unit that is `factor` millimetres, in millimetres. Dividing by a whole number of parts keeps 40 um at exactly 0.04 mm. */
export function toMm(value: number, factor: number): number {
  return factor < 1 ? value / Math.round(1 / factor) : value * factor;
}
