import { TautlineError } from "#shared/errors.ts";

/** Turns a value that came from outside into a typed one. @throws bad-request that names the place and what was found. */
export type Shape<T> = (value: unknown, where: string) => T;

/** A key that may be absent. */
export interface OptionalShape<T> {
  readonly optional: Shape<T>;
}

type Fields = Readonly<Record<string, Shape<unknown> | OptionalShape<unknown>>>;
type OptionalKeys<F extends Fields> = { [K in keyof F]: F[K] extends OptionalShape<unknown> ? K : never }[keyof F];
type ObjectOf<F extends Fields> = {
  [K in Exclude<keyof F, OptionalKeys<F>>]: F[K] extends Shape<infer T> ? T : never;
} & { [K in OptionalKeys<F>]?: F[K] extends OptionalShape<infer T> ? T : never };

/** The refusal of a body; the text never repeats more than a few words of what was sent. */
export function refuse(where: string, expected: string, value: unknown): TautlineError<"bad-request"> {
  const what = `expected ${expected}, found ${describe(value)}`;
  return new TautlineError("bad-request", `The request is not understood: ${where}: ${what}.`, { what, where });
}

function describe(value: unknown): string {
  if (value === undefined) return "nothing";
  if (value === null) return "null";
  if (Array.isArray(value)) return `a list of ${value.length}`;
  if (typeof value === "string") return value.length > 40 ? `a text of ${value.length} characters` : JSON.stringify(value);
  return typeof value === "object" ? "an object" : String(value);
}

/** An object with these keys and no others. */
export function object<F extends Fields>(fields: F): Shape<ObjectOf<F>> {
  return (value, where) => {
    if (typeof value !== "object" || value === null || Array.isArray(value)) throw refuse(where, "an object", value);
    const given = value as Record<string, unknown>;
    const unknown = Object.keys(given).find((key) => !Object.hasOwn(fields, key));
    if (unknown !== undefined) throw refuse(`${where}.${unknown.slice(0, 40)}`, "no such key", given[unknown]);
    const result: Record<string, unknown> = {};
    for (const [key, shape] of Object.entries(fields)) {
      const place = `${where}.${key}`;
      if (typeof shape === "function") result[key] = shape(given[key], place);
      else if (given[key] !== undefined) result[key] = shape.optional(given[key], place);
    }
    return result as ObjectOf<F>;
  };
}

/** A key that may be absent. */
export function optional<T>(shape: Shape<T>): OptionalShape<T> {
  return { optional: shape };
}

/** The shape, or null. */
export function nullable<T>(shape: Shape<T>): Shape<T | null> {
  return (value, where) => (value === null ? null : shape(value, where));
}

/** A list of at most `most` items. */
export function list<T>(shape: Shape<T>, most: number): Shape<T[]> {
  return (value, where) => {
    if (!Array.isArray(value) || value.length > most) throw refuse(where, `a list of at most ${most}`, value);
    return value.map((item, index) => shape(item, `${where}[${index}]`));
  };
}

/** One of these words. */
export function oneOf<const T extends string>(...words: readonly T[]): Shape<T> {
  return (value, where) => {
    if (!words.includes(value as T)) throw refuse(where, `one of ${words.join(", ")}`, value);
    return value as T;
  };
}

/** A text of `least` to `most` characters. */
export function text(most: number, least = 0): Shape<string> {
  return (value, where) => {
    if (typeof value !== "string" || value.length > most || value.length < least) {
      throw refuse(where, `a text of ${least} to ${most} characters`, value);
    }
    return value;
  };
}

/** A text that matches `pattern`, described as `what`. */
export function matching(pattern: RegExp, what: string): Shape<string> {
  return (value, where) => {
    if (typeof value !== "string" || !pattern.test(value)) throw refuse(where, what, value);
    return value;
  };
}

/** A finite number from `least` to `most`. */
export function number(least = -Number.MAX_VALUE, most = Number.MAX_VALUE): Shape<number> {
  return (value, where) => {
    if (typeof value !== "number" || !Number.isFinite(value) || value < least || value > most) {
      const bounds = least === -Number.MAX_VALUE ? "a finite number" : `a number from ${least} to ${most}`;
      throw refuse(where, bounds, value);
    }
    return value;
  };
}

/** A whole number from `least` to `most`. */
export function whole(least: number, most: number): Shape<number> {
  return (value, where) => {
    if (!Number.isInteger(value) || (value as number) < least || (value as number) > most) {
      throw refuse(where, `a whole number from ${least} to ${most}`, value);
    }
    return value as number;
  };
}

/** True or false. */
export const flag: Shape<boolean> = (value, where) => {
  if (typeof value !== "boolean") throw refuse(where, "true or false", value);
  return value;
};

/** Three finite numbers. */
export function triple(item: Shape<number> = number()): Shape<[number, number, number]> {
  return (value, where) => {
    if (!Array.isArray(value) || value.length !== 3) throw refuse(where, "a list of three numbers", value);
    return [item(value[0], `${where}[0]`), item(value[1], `${where}[1]`), item(value[2], `${where}[2]`)];
  };
}
