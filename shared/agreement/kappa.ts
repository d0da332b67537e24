import { normalQuantile } from "#shared/agreement/distributions.ts";
import { type Interval, intervalOn, type Reasons } from "#shared/agreement/interval.ts";

export type AgreementWeights = "plain" | "linear" | "quadratic";

/** Chance-corrected agreement on categories. */
export interface CategoryAgreement {
  readonly value: number | null;
  /** Observed agreement, 0-1. */
  readonly observed: number | null;
  /** Agreement expected by chance, 0-1. */
  readonly expected: number | null;
  /** Standard error that treats items as independent. */
  readonly se: number | null;
  /** Asymptotic, conditional on these valves. */
  readonly interval: Interval | null;
  readonly reasons: Reasons;
}

/** Agreement weight of categories i and j of q in order: 1 on the diagonal, falling to 0. */
export function agreementWeight(weights: AgreementWeights, i: number, j: number, q: number): number {
  if (i === j) return 1;
  if (weights === "plain" || q < 2) return 0;
  const apart = Math.abs(i - j) / (q - 1);
  return weights === "linear" ? 1 - apart : 1 - apart * apart;
}

/** Nothing but one sentence for every number that is missing. */
export function noAgreement(why: string): CategoryAgreement {
  const reasons = { value: why, observed: why, expected: why, se: why, interval: why };
  return { value: null, observed: null, expected: null, se: null, interval: null, reasons };
}

/** Agreement with its standard error and the asymptotic interval that follows from it. */
export function withStandardError(
  unclipped: number,
  observed: number,
  expected: number,
  se: number,
  items: number,
): CategoryAgreement {
  // Sums of shares may round to a hair above 1.
  const value = Math.min(1, unclipped);
  if (!Number.isFinite(se)) {
    const why = "A standard error needs two items or more.";
    return { value, observed, expected, se: null, interval: null, reasons: { se: why, interval: why } };
  }
  const half = normalQuantile(0.975) * se;
  const made = intervalOn("items-of-these-valves", items, "asymptotic normal", () => [value - half, Math.min(1, value + half)]);
  return { value, observed, expected, se, interval: made.interval, reasons: {} };
}

/**
 * Cohen's kappa of two raters, plain or weighted.
 * @param table shape [categories of A][categories of B], counts; for weighted kappa the categories are in order.
 * @source Cohen, Psychol Bull 1968;70:213-220; standard error of Fleiss, Cohen & Everitt, Psychol Bull 1969;72:323-327
 */
export function cohenKappa(table: readonly (readonly number[])[], weights: AgreementWeights): CategoryAgreement {
  const q = table.length;
  const n = table.flat().reduce((sum, count) => sum + count, 0);
  if (n === 0) return noAgreement("There is no item that both marked.");
  const p = table.map((row) => row.map((count) => count / n));
  const rows = p.map((row) => row.reduce((sum, x) => sum + x, 0));
  const columns = p.map((_, j) => p.reduce((sum, row) => sum + row[j]!, 0));
  const w = (i: number, j: number) => agreementWeight(weights, i, j, q);
  const sum = (value: (i: number, j: number) => number) => {
    let total = 0;
    for (let i = 0; i < q; i++) for (let j = 0; j < q; j++) total += value(i, j);
    return total;
  };
  const observed = sum((i, j) => w(i, j) * p[i]![j]!);
  const expected = sum((i, j) => w(i, j) * rows[i]! * columns[j]!);
  if (1 - expected < 1e-12) return oneCategory(observed, expected);
  const value = (observed - expected) / (1 - expected);
  const ofRow = p.map((_, i) => columns.reduce((total, share, j) => total + share * w(i, j), 0));
  const ofColumn = p.map((_, j) => rows.reduce((total, share, i) => total + share * w(i, j), 0));
  const squares = sum((i, j) => p[i]![j]! * (w(i, j) * (1 - expected) - (ofRow[i]! + ofColumn[j]!) * (1 - observed)) ** 2);
  const free = squares - (observed * expected - 2 * expected + observed) ** 2;
  return withStandardError(value, observed, expected, Math.sqrt(Math.max(0, free) / n) / (1 - expected) ** 2, n);
}

/**
 * Fleiss' kappa of the same number of raters on each subject, any raters.
 * @param counts shape [subjects][categories]: how many raters chose each category.
 * @source Fleiss, Psychol Bull 1971;76:378-382
 */
export function fleissKappa(counts: readonly (readonly number[])[]): CategoryAgreement {
  const raters = (row: readonly number[]) => row.reduce((sum, count) => sum + count, 0);
  const n = counts.length === 0 ? 0 : raters(counts[0]!);
  if (n < 2) return noAgreement("Fleiss' kappa needs subjects with two ratings or more.");
  if (counts.some((row) => raters(row) !== n))
    return noAgreement("Fleiss' kappa needs the same number of ratings of every subject; Krippendorff's alpha takes gaps.");
  const shares = counts[0]!.map((_, j) => counts.reduce((sum, row) => sum + row[j]!, 0) / (n * counts.length));
  const expected = shares.reduce((sum, share) => sum + share * share, 0);
  const agreeing = counts.map((row) => row.reduce((sum, count) => sum + count * (count - 1), 0) / (n * (n - 1)));
  const observed = agreeing.reduce((sum, share) => sum + share, 0) / counts.length;
  if (1 - expected < 1e-12) return oneCategory(observed, expected);
  const why = "No standard error is given for Fleiss' kappa: see the interval over specimens.";
  const value = Math.min(1, (observed - expected) / (1 - expected));
  return { value, observed, expected, se: null, interval: null, reasons: { se: why, interval: why } };
}

function oneCategory(observed: number, expected: number): CategoryAgreement {
  const why = "Only one category was used: agreement beyond chance cannot be told.";
  return { value: null, observed, expected, se: null, interval: null, reasons: { value: why, se: why, interval: why } };
}
