import {
  type AgreementWeights,
  agreementWeight,
  type CategoryAgreement,
  noAgreement,
  withStandardError,
} from "#shared/agreement/kappa.ts";

/**
 * Gwet's AC1 (plain weights) or AC2 of any number of raters with gaps.
 * @param counts shape [subjects][categories]: how many raters chose each category; for weights the categories are in order.
 *   All categories that could have been chosen are columns, also those that nobody chose.
 * @source Gwet, Br J Math Stat Psychol 2008;61:29-48, in the form for missing ratings of the Handbook of Inter-Rater
 *   Reliability, 4th edition, 2014 (memory)
 */
export function gwetAgreement(counts: readonly (readonly number[])[], weights: AgreementWeights): CategoryAgreement {
  const q = counts[0]?.length ?? 0;
  const total = (row: readonly number[]) => row.reduce((sum, count) => sum + count, 0);
  const rated = counts.filter((row) => total(row) >= 1);
  const pairable = rated.filter((row) => total(row) >= 2).length;
  if (q < 2) return noAgreement("Agreement beyond chance needs two categories or more to choose from.");
  if (pairable === 0) return noAgreement("No item was rated by two annotators or more.");
  const n = rated.length;
  const w = (i: number, j: number) => agreementWeight(weights, i, j, q);
  const categories = rated[0]!.map((_, j) => j);
  const weightSum = categories.reduce((sum, i) => sum + categories.reduce((inner, j) => inner + w(i, j), 0), 0);
  const chance = weightSum / (q * (q - 1));
  const shares = categories.map((j) => rated.reduce((sum, row) => sum + row[j]! / total(row), 0) / n);
  const observedOf = (row: readonly number[]) => {
    const raters = total(row);
    const agreeing = row.reduce(
      (sum, count, i) => sum + count * (row.reduce((inner, other, j) => inner + w(i, j) * other, 0) - 1),
      0,
    );
    return raters < 2 ? null : agreeing / (raters * (raters - 1));
  };
  const observed = rated.reduce((sum, row) => sum + (observedOf(row) ?? 0), 0) / pairable;
  const expected = chance * shares.reduce((sum, share) => sum + share * (1 - share), 0);
  const value = (observed - expected) / (1 - expected);
  const squares = rated.reduce((sum, row) => {
    const own = observedOf(row);
    const agreement = own === null ? 0 : ((n / pairable) * (own - expected)) / (1 - expected);
    const ownChance = chance * row.reduce((inner, count, j) => inner + (1 - shares[j]!) * (count / total(row)), 0);
    const linear = agreement - (2 * (1 - value) * (ownChance - expected)) / (1 - expected);
    return sum + (linear - value) ** 2;
  }, 0);
  return withStandardError(value, observed, expected, Math.sqrt(squares / (n * (n - 1))), n);
}
