import type { Reasons } from "#shared/agreement/interval.ts";
import { solveLinear } from "#shared/agreement/solve-linear.ts";

/** One value of the long table. */
export interface LongValue {
  readonly specimen: string;
  /** Item within the specimen, the same for all annotators. */
  readonly item: string;
  readonly annotator: string;
  readonly pass: number;
  readonly value: number;
}

export type ComponentName = "specimen" | "item" | "annotator" | "pass" | "residual";

/** Variances by source, in the value's unit squared; null where a source cannot be told from the rest. */
export interface VarianceComponents extends Readonly<Record<ComponentName, number | null>> {
  /** Sources whose estimate came out below zero and is given as 0. */
  readonly setToZero: readonly ComponentName[];
  readonly values: number;
  readonly reasons: Reasons;
}

/** A pass is one annotator's one go at one specimen: its values share what that go has in common. */
const GROUPS: Readonly<Record<Exclude<ComponentName, "residual">, (value: LongValue) => string>> = {
  specimen: (value) => value.specimen,
  item: (value) => JSON.stringify([value.specimen, value.item]),
  annotator: (value) => value.annotator,
  pass: (value) => JSON.stringify([value.specimen, value.annotator, value.pass]),
};

/**
 * Variance components of a long table that may have gaps: sums of squares of each grouping set equal to what the
 * components make them expect. In a complete table these are the classical analysis-of-variance estimates.
 * @source Henderson, Biometrics 1953;9:226-252, method 1 (its expectations derived here for these groupings)
 */
export function varianceComponents(values: readonly LongValue[]): VarianceComponents {
  const reasons: Record<string, string> = {};
  const answer = {
    specimen: null,
    item: null,
    annotator: null,
    pass: null,
    residual: null,
    setToZero: [] as ComponentName[],
    values: values.length,
    reasons,
  };
  const variances: Partial<Record<ComponentName, number>> = {};
  const groupings = usable(values, reasons);
  if (values.length < 2 || groupings.every((grouping) => grouping.levels === values.length)) {
    reasons.residual = "Every value stands alone: error cannot be told from the rest.";
    for (const { name } of groupings) reasons[name] = reasons.residual;
    return answer;
  }
  // One equation a grouping and one for the single values; unknown are the groupings' variances and the residual's.
  const single: Grouping = { name: "residual", of: values.map((_, i) => i), levels: values.length };
  const whole: Grouping = { name: "residual", of: values.map(() => 0), levels: 1 };
  const equations = [...groupings, single];
  const mean = values.reduce((sum, one) => sum + one.value, 0) / values.length;
  const centred = values.map((one) => one.value - mean);
  const matrix = equations.map((row) => equations.map((column) => overlap(row, column) - overlap(whole, column)));
  const solution = solveLinear(
    matrix,
    equations.map((row) => squares(row, centred)),
  );
  if (!solution) {
    for (const { name } of equations) reasons[name] = "The sources overlap so that they cannot be told apart.";
    return answer;
  }
  const nothing = 1e-12 * (squares(single, centred) / values.length);
  equations.forEach(({ name }, k) => {
    variances[name] = solution[k]! <= nothing ? 0 : solution[k]!;
    if (solution[k]! < -nothing) answer.setToZero.push(name);
  });
  return { ...answer, ...variances };
}

interface Grouping {
  readonly name: ComponentName;
  /** Level of each value. */
  readonly of: readonly number[];
  readonly levels: number;
}

/** Groupings that can be told apart: two levels or more, not one a value, and no other grouping with the same groups. */
function usable(values: readonly LongValue[], reasons: Record<string, string>): Grouping[] {
  const kept: Grouping[] = [];
  const seen = new Map<string, ComponentName>();
  for (const name of ["specimen", "item", "annotator", "pass"] as const) {
    const numbers = new Map<string, number>();
    const of = values.map((value) => {
      const key = GROUPS[name](value);
      if (!numbers.has(key)) numbers.set(key, numbers.size);
      return numbers.get(key)!;
    });
    const twin = seen.get(of.join());
    if (numbers.size < 2) reasons[name] = `There is only one ${name}: how ${name}s differ cannot be told.`;
    else if (numbers.size === values.length) reasons[name] = `Each ${name} has a single value: its part is in the residual.`;
    else if (twin) reasons[name] = `Each ${twin} has one ${name}: their parts cannot be told apart, and count as ${twin}.`;
    else {
      seen.set(of.join(), name);
      kept.push({ name, of, levels: numbers.size });
    }
  }
  return kept;
}

/** Sum over groups of (sum of values)^2 / size. */
function squares(grouping: Grouping, values: readonly number[]): number {
  const [sums, sizes] = [new Float64Array(grouping.levels), new Float64Array(grouping.levels)];
  values.forEach((value, i) => {
    sums[grouping.of[i]!]! += value;
    sizes[grouping.of[i]!]! += 1;
  });
  return sums.reduce((total, sum, g) => total + (sum * sum) / sizes[g]!, 0);
}

/** How much of `column`'s variance the squares of `row` expect: sum over row's groups of (sum of squared shared counts) / size. */
function overlap(row: Grouping, column: Grouping): number {
  const shared = new Map<number, number>();
  const sizes = new Float64Array(row.levels);
  row.of.forEach((g, i) => {
    const key = g * column.levels + column.of[i]!;
    shared.set(key, (shared.get(key) ?? 0) + 1);
    sizes[g]! += 1;
  });
  let sum = 0;
  for (const [key, count] of shared) sum += (count * count) / sizes[Math.floor(key / column.levels)]!;
  return sum;
}
