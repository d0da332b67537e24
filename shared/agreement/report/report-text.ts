import type { Interval, Reasons } from "#shared/agreement/interval.ts";
import type { ReportColumn, ReportTable, ReportText } from "#shared/agreement/report/report-data.ts";

/** A number with fixed digits and a true minus sign; never "-0". @param value finite */
export function fixed(value: number, digits: number): string {
  const text = value.toFixed(digits);
  if (!text.startsWith("-")) return text;
  return Number(text) === 0 ? text.slice(1) : `\u2212${text.slice(1)}`;
}

/** Decimals of a quantity by its unit. */
export function digitsOf(unit: string): number {
  return unit === "mm" ? 3 : unit === "count" ? 2 : 1;
}

/** A share as per cent. */
export function percent(share: number, digits = 0): string {
  return `${fixed(100 * share, digits)} %`;
}

/** An interval's two ends. */
export function ends(interval: Interval, digits: number): string {
  return `${fixed(interval.low, digits)} to ${fixed(interval.high, digits)}`;
}

/** How an interval was made and what it is conditional on, for the note beside it. */
export function basisOf(interval: Interval): string {
  const level = `${percent(interval.level)} interval: ${interval.method}`;
  const on =
    interval.conditionalOn === null ? "for new specimens by these annotators" : `conditional on ${interval.conditionalOn}`;
  return `${level}; ${on}${interval.weak ? "; weak, since it rests on fewer than 10 specimens" : ""}.`;
}

/** A paragraph. */
export function text(words: string, tone: ReportText["tone"] = "plain"): ReportText {
  return { kind: "text", tone, text: words };
}

/** What stands where a number cannot be given; its mark points to the reason. */
const NOT_GIVEN = "not given";

/** A table whose cells may point to reasons under it; the same sentence gets the same mark. */
export class TableOf {
  readonly #caption: string;
  readonly #columns: readonly ReportColumn[];
  readonly #rows: string[][] = [];
  readonly #marked: string[] = [];
  readonly #plain: string[] = [];

  constructor(caption: string, columns: readonly (string | ReportColumn)[]) {
    this.#caption = caption;
    this.#columns = columns.map((column) => (typeof column === "string" ? { name: column } : column));
  }

  row(...cells: string[]): void {
    this.#rows.push(cells);
  }

  /** A sentence under the table that no cell points to. */
  note(sentence: string): void {
    if (!this.#plain.includes(sentence)) this.#plain.push(sentence);
  }

  /** The text with the mark of a sentence under the table. */
  marked(words: string, sentence: string): string {
    let k = this.#marked.indexOf(sentence);
    if (k < 0) k = this.#marked.push(sentence) - 1;
    return `${words}\u00a0${markOf(k)}`;
  }

  /** A number, or "not given" with the mark of its reason. */
  number(value: number | null | undefined, digits: number, reason: string | undefined): string {
    if (value !== null && value !== undefined && Number.isFinite(value)) return fixed(value, digits);
    return this.marked(NOT_GIVEN, reason ?? "These passes do not give this number.");
  }

  share(value: number | null, reason: string | undefined): string {
    return value === null ? this.number(null, 0, reason) : percent(value);
  }

  /** An interval with the mark of how it was made, or "not given" with the mark of its reason. */
  interval(interval: Interval | null, digits: number, reason: string | undefined): string {
    if (!interval) return this.number(null, digits, reason);
    return this.marked(ends(interval, digits), basisOf(interval));
  }

  /** A value of an object that carries reasons. */
  of<K extends string>(from: Readonly<Record<K, number | null>> & { readonly reasons: Reasons }, key: K, digits: number): string {
    return this.number(from[key], digits, from.reasons[key]);
  }

  get isEmpty(): boolean {
    return this.#rows.length === 0;
  }

  get table(): ReportTable {
    const notes = [...this.#marked.map((sentence, k) => `${markOf(k)} ${sentence}`), ...this.#plain];
    return { kind: "table", caption: this.#caption, columns: this.#columns, rows: this.#rows, notes };
  }
}

/** a) to z), then aa) and on. */
function markOf(k: number): string {
  const letter = String.fromCharCode(97 + (k % 26));
  return `${k < 26 ? "" : String.fromCharCode(96 + Math.floor(k / 26))}${letter})`;
}
