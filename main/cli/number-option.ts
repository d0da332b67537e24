import type { VerbCall } from "#main/cli/verb.ts";
import { TautlineError } from "#shared/errors.ts";

/** The value of an option as a whole number from `least` on; undefined when it is not given. @throws misuse */
export function wholeOption(options: VerbCall["options"], name: string, least: number): number | undefined {
  const text = options[name];
  if (text === undefined) return undefined;
  const value = /^\d{1,9}$/.test(String(text)) ? Number(text) : Number.NaN;
  if (!(value >= least)) throw wrong(`--${name} must be a whole number from ${least} on, found '${String(text)}'.`);
  return value;
}

/** The value of an option that is one of the given words; undefined when it is not given. @throws misuse */
export function wordOption<T extends string>(options: VerbCall["options"], name: string, words: readonly T[]): T | undefined {
  const text = options[name];
  if (text === undefined) return undefined;
  if (!words.includes(text as T)) throw wrong(`--${name} must be ${words.join(" or ")}, found '${String(text)}'.`);
  return text as T;
}

function wrong(what: string): TautlineError<"misuse"> {
  return new TautlineError("misuse", what, { what });
}

/** The value of an option as a finite number above `above` (or equal to it when `orEqual`); `fallback` when it is not given. @throws misuse */
export function realOption<T>(options: VerbCall["options"], name: string, fallback: T, above = 0, orEqual = false): number | T {
  const text = options[name];
  if (text === undefined) return fallback;
  const value = /^[-+]?(\d+\.?\d*|\.\d+)([eE][-+]?\d+)?$/.test(String(text)) ? Number(text) : Number.NaN;
  if (Number.isFinite(value) && (value > above || (orEqual && value === above))) return value;
  throw wrong(`--${name} must be a number ${orEqual ? "of at least" : "above"} ${above}, found '${String(text)}'.`);
}
