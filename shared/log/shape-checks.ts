/** What is wrong with a value and where in it; turned into the reader's own error by whoever knows the file and line. */
export class ShapeFault extends Error {
  override readonly name = "ShapeFault";
  readonly where: string;
  readonly expected: string;
  readonly found: string;

  constructor(where: string, expected: string, value: unknown) {
    super(`${where}: expected ${expected}`);
    this.where = where;
    this.expected = expected;
    this.found = foundText(value);
  }
}

/** Passes a value of the right shape, throws {@link ShapeFault} for any other. `where` is a dotted path. */
export type Check = (value: unknown, where: string) => void;

function foundText(value: unknown): string {
  if (value === undefined) return "nothing";
  const text = typeof value === "object" ? JSON.stringify(value) : (JSON.stringify(value) ?? String(value));
  return text.length > 80 ? `${text.slice(0, 77)}...` : text;
}

/** Check that `test` holds; `expected` says it in words. */
export function holds(expected: string, test: (value: unknown) => boolean): Check {
  return (value, where) => {
    if (!test(value)) throw new ShapeFault(where, expected, value);
  };
}

/** Check for text. */
export const isText = holds("text", (v) => typeof v === "string");
/** Check for three finite numbers (a place in millimetres, order xyz). */
export const isFinite3 = holds(
  "three finite numbers",
  (v) => Array.isArray(v) && v.length === 3 && v.every((n) => typeof n === "number" && Number.isFinite(n)),
);
/** Check for a finite number. */
export const isFiniteNumber = holds("a finite number", (v) => typeof v === "number" && Number.isFinite(v));
/** Check for true or false. */
export const isBoolean = holds("true or false", (v) => typeof v === "boolean");
/** Check for a whole number, 0 or more. */
export const isCount = holds("a whole number, 0 or more", (v) => Number.isSafeInteger(v) && (v as number) >= 0);
/** Check for an object that is no list. */
export const isPlainObject = holds("an object", (v) => typeof v === "object" && v !== null && !Array.isArray(v));

/** Check for one of `words`. */
export function oneOf(words: readonly string[]): Check {
  return holds(`one of ${words.join(", ")}`, (v) => typeof v === "string" && words.includes(v));
}

/** Check that null passes too. */
export function orNull(check: Check): Check {
  return (value, where) => {
    if (value !== null) check(value, where);
  };
}

/** A key that may be left out. */
export interface OptionalCheck {
  readonly optional: Check;
}

/** Marks a key as one that may be left out. */
export function optional(check: Check): OptionalCheck {
  return { optional: check };
}

/** Check for a list whose items all pass. */
export function listOf(item: Check): Check {
  return (value, where) => {
    if (!Array.isArray(value)) throw new ShapeFault(where, "a list", value);
    value.forEach((entry, i) => {
      item(entry, `${where}[${i}]`);
    });
  };
}

/** Check for a list of finite numbers (`mayBeNull`: or null); quick, since curves are long. */
export function numberList(mayBeNull: boolean): Check {
  return (value, where) => {
    if (!Array.isArray(value)) throw new ShapeFault(where, "a list", value);
    for (let i = 0; i < value.length; i++) {
      const entry: unknown = value[i];
      if (typeof entry === "number" ? Number.isFinite(entry) : mayBeNull && entry === null) continue;
      throw new ShapeFault(`${where}[${i}]`, mayBeNull ? "a finite number or null" : "a finite number", entry);
    }
  };
}

/** Check for an object with exactly these keys (those marked optional may be missing; no others may be there). */
export function objectOf<Keys extends string>(fields: Readonly<Record<Keys, Check | OptionalCheck>>): Check {
  const entries = Object.entries(fields) as [Keys, Check | OptionalCheck][];
  return (value, where) => {
    isPlainObject(value, where);
    const record = value as Record<string, unknown>;
    for (const key of Object.keys(record)) {
      if (!Object.hasOwn(fields, key)) throw new ShapeFault(`${where}.${key}`, "no such key", record[key]);
    }
    for (const [key, check] of entries) {
      const present = Object.hasOwn(record, key) && record[key] !== undefined;
      if (typeof check === "function") check(present ? record[key] : undefined, `${where}.${key}`);
      else if (present) check.optional(record[key], `${where}.${key}`);
    }
  };
}
