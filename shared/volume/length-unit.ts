const PREFIX: Readonly<Record<string, number>> = {
  pico: 1e-12,
  nano: 1e-9,
  micro: 1e-6,
  milli: 1e-3,
  centi: 1e-2,
  deci: 1e-1,
  "": 1,
};

const SYMBOLS: Readonly<Record<string, number>> = {
  nm: 1e-6,
  um: 1e-3,
  "\u00b5m": 1e-3, // micro sign
  "\u03bcm": 1e-3, // Greek mu
  micron: 1e-3,
  microns: 1e-3,
  mm: 1,
  cm: 10,
  m: 1000,
  inch: 25.4,
  inches: 25.4,
  angstrom: 1e-7,
};

const METRE = /^(pico|nano|micro|milli|centi|deci|)(?:metre|meter)s?$/;

/**
 * Millimetres in one of the named length unit; null when the word is empty or no length known here. Accepts symbols (`um`,
 * micro sign or Greek mu, `mm` ...), `micron`, and spelled-out metres with either ending; letter case counts for symbols only.
 * @source UDUNITS-2 names as OME-Zarr asks for; SI symbols and words as NRRD headers carry them.
 */
export function mmPerUnit(word: string | null | undefined): number | null {
  const trimmed = word?.trim() ?? "";
  const symbol = SYMBOLS[trimmed] ?? (/^[A-Za-z]{5,}$/.test(trimmed) ? SYMBOLS[trimmed.toLowerCase()] : undefined);
  if (symbol !== undefined) return symbol;
  const match = METRE.exec(trimmed.toLowerCase());
  return match ? cleanProduct(PREFIX[match[1]!]!) : null;
}

/** Metres to millimetres without the last-bit error of a product such as 1e-6 * 1000. */
function cleanProduct(metres: number): number {
  return Number(`${metres.toExponential().split("e")[0]}e${Number(metres.toExponential().split("e")[1]) + 3}`);
}

/** `value` of a unit that is `factor` millimetres, in millimetres. Dividing by a whole number of parts keeps 40 um at exactly 0.04 mm. */
export function toMm(value: number, factor: number): number {
  return factor < 1 ? value / Math.round(1 / factor) : value * factor;
}
