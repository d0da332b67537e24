import type { StudyQuantity } from "#shared/agreement/study/continuous.ts";
import { matchedRows, type QuantityRows, totalRows } from "#shared/agreement/study/quantities.ts";
import type { SpecimenItems, Study, StudySpecimen } from "#shared/agreement/study/study.ts";
import type { LongValue } from "#shared/agreement/variance-components.ts";

/** Which of a specimen's passes are compared: each annotator's first. */
export function comparedPasses(specimen: StudySpecimen): number[] {
  return specimen.firstPass.filter((p) => p >= 0);
}

/** Every quantity over all specimens, the values of each row in the order of the study's annotators. */
export function quantitiesOf({ annotators, specimens }: Study, items: readonly SpecimenItems[]): StudyQuantity[] {
  const first = specimens.map((specimen, s) => {
    const compared = comparedPasses(specimen);
    const spread = (values: readonly (number | null)[]) =>
      annotators.map((_, j) => (specimen.firstPass[j]! < 0 ? null : values[compared.indexOf(specimen.firstPass[j]!)]!));
    return rowsOf(specimen, items[s]!, compared).map((quantity) => ({
      ...quantity,
      rows: quantity.rows.map((row) => ({ ...row, values: spread(row.values) })),
      coverage: quantity.coverage && spread(quantity.coverage),
    }));
  });
  const every = specimens.map((specimen, s) =>
    rowsOf(
      specimen,
      items[s]!,
      specimen.passes.map((_, p) => p),
    ),
  );
  return (first[0] ?? []).map(({ quantity, unit, on, coverage }, q) => ({
    quantity,
    unit,
    on,
    specimens: specimens.map(({ name }) => name),
    rows: first.map((list) => list[q]!.rows),
    coverage: coverage && first.map((list) => list[q]!.coverage!),
    long: specimens.flatMap((specimen, s) => longValues(specimen, every[s]![q]!)),
  }));
}

function rowsOf(specimen: StudySpecimen, items: SpecimenItems, compared: readonly number[]): QuantityRows[] {
  return [...totalRows(specimen, compared), ...matchedRows(specimen, items, compared)];
}

function longValues(specimen: StudySpecimen, { rows }: QuantityRows): LongValue[] {
  return rows.flatMap(({ item, values }) =>
    values.flatMap((value, p) => {
      const { annotator, pass } = specimen.passes[p]!;
      return value === null ? [] : [{ specimen: specimen.name, item, annotator, pass, value }];
    }),
  );
}
