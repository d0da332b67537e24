import { describe, expect, it } from "vitest";
import { krippendorffAlpha } from "#shared/agreement/alpha.ts";
import { blandAltman } from "#shared/agreement/bland-altman.ts";
import { captureRecapture } from "#shared/agreement/capture-recapture.ts";
import { detectionRates } from "#shared/agreement/em-detection.ts";
import { disagreementOf, equivalence } from "#shared/agreement/equivalence.ts";
import { gwetAgreement } from "#shared/agreement/gwet.ts";
import { icc } from "#shared/agreement/icc.ts";
import { overSpecimens } from "#shared/agreement/jackknife.ts";
import { cohenKappa, fleissKappa } from "#shared/agreement/kappa.ts";
import { mean } from "#shared/agreement/mean-squares.ts";
import { measurementError } from "#shared/agreement/sem.ts";
import { varianceComponents } from "#shared/agreement/variance-components.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";

/** Places of numbers that are not finite. */
function notFinite(value: unknown, at = ""): string[] {
  if (typeof value === "number") return Number.isFinite(value) ? [] : [at];
  if (typeof value !== "object" || value === null) return [];
  return Object.entries(value).flatMap(([key, inner]) => notFinite(inner, `${at}.${key}`));
}

describe("every statistic of small tables of few values", () => {
  // own check: tables that are often constant, empty, or without spread, seeded
  it("is a number or null, never anything else", () => {
    const random = new SeededRandom(77);
    for (let run = 0; run < 1500; run++) {
      const [n, k, q] = [random.below(7), 1 + random.below(4), 1 + random.below(3)];
      const table = Array.from({ length: n }, () => Array.from({ length: k }, () => random.below(q)));
      const gaps = table.map((row) => row.map((value) => (random.unit() < 0.2 ? null : value)));
      const counts = table.map((row) => Array.from({ length: q }, (_, c) => row.filter((value) => value === c).length));
      const square = Array.from({ length: q }, () => Array.from({ length: q }, () => random.below(3)));
      const readings = table.map((row, i) => ({ specimen: `${i % (1 + random.below(6))}`, a: row[0]!, b: row[row.length - 1]! }));
      const long = table.flatMap((row, i) =>
        row.map((value, j) => ({ specimen: `${i % 2}`, item: `${i}`, annotator: `${j}`, pass: 1 + random.below(2), value })),
      );
      const marks = table.map((row) => row.map((value) => value > 0));
      const turned = Array.from({ length: k }, (_, j) => marks.map((row) => row[j]!));
      const columns = Array.from({ length: k }, (_, j) => gaps.map((row) => row[j]!));
      const disagreement = disagreementOf(
        columns,
        gaps.map((row) => row[0]!),
        random.below(2) === 0 ? "absolute" : "squared",
      );
      const results = {
        icc: icc(table, random.below(2) === 0 ? "one-item-per-specimen" : "items-of-these-valves"),
        sem: measurementError(table),
        bland: run % 10 === 0 ? blandAltman(readings) : null,
        plain: cohenKappa(square, "plain"),
        quadratic: cohenKappa(square, "quadratic"),
        fleiss: fleissKappa(counts),
        ac1: gwetAgreement(counts, "plain"),
        ac2: gwetAgreement(counts, "linear"),
        alpha: (["nominal", "ordinal", "interval", "ratio"] as const).map((metric) => krippendorffAlpha(gaps, metric)),
        components: varianceComponents(long),
        capture: captureRecapture(marks, k),
        rates: run % 10 === 0 ? detectionRates(turned, null, run) : null,
        over: overSpecimens((chosen) => (n === 0 ? null : mean(chosen.map((s) => table[s]![0]!))), n, run),
        equivalence: equivalence(disagreement ? Array.from({ length: n }, () => disagreement) : [], 1, false),
      };
      expect(notFinite(results), `run ${run}: ${JSON.stringify(table)} ${JSON.stringify(square)}`).toEqual([]);
    }
  });
});
