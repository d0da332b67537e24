import { describe, expect, it } from "vitest";
import { type CanonicalTree, canonicalTree } from "#shared/compare/canonical.ts";
import { type CostModel, geometryCosts, structureCosts } from "#shared/compare/costs.ts";
import { editDistance } from "#shared/compare/edit-distance/edit-distance.ts";
import type { PlainTree } from "#shared/trees/plain-trees.ts";
import { population } from "#test/shared/compare/populations.ts";
import { randomTree, seededRandom } from "#test/shared/compare/small-trees.ts";

// The same distance as a mixed-integer program (Lerouge et al., Pattern Recognit 2017;72:254-265, formulation F2, from
// memory) solved by an independent solver, HiGHS.
const highs = await (await import("highs")).default();

function byMixedInteger(a: CanonicalTree, b: CanonicalTree, costs: CostModel, held: boolean): number {
  const [n, m] = [a.nodes.length, b.nodes.length];
  const objective: string[] = [];
  const rows: string[] = [];
  const binary: string[] = [];
  const constant = n + m + a.strands.length + b.strands.length;
  const term = (value: number, name: string) => objective.push(`${value < 0 ? "-" : "+"} ${Math.abs(value).toFixed(12)} ${name}`);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < m; j++) {
      term(costs.node(a, i, b, j) - 2, `x${i}_${j}`);
      binary.push(`x${i}_${j}`);
    }
  }
  a.strands.forEach((p, k) => {
    b.strands.forEach((q, l) => {
      for (const turned of [0, 1]) {
        term(costs.strand(p.length, q.length) - 2, `y${k}_${l}_${turned}`);
        binary.push(`y${k}_${l}_${turned}`);
      }
      const [y0, y1] = [`y${k}_${l}_0`, `y${k}_${l}_1`];
      rows.push(
        `${y0} - x${p.from}_${q.from} <= 0`,
        `${y0} - x${p.to}_${q.to} <= 0`,
        `${y1} - x${p.from}_${q.to} <= 0`,
        `${y1} - x${p.to}_${q.from} <= 0`,
      );
    });
    if (b.strands.length > 0) rows.push(`${b.strands.flatMap((_, l) => [`y${k}_${l}_0`, `y${k}_${l}_1`]).join(" + ")} <= 1`);
  });
  b.strands.forEach((_, l) => {
    if (a.strands.length > 0) rows.push(`${a.strands.flatMap((_, k) => [`y${k}_${l}_0`, `y${k}_${l}_1`]).join(" + ")} <= 1`);
  });
  for (let i = 0; i < n; i++) rows.push(`${Array.from({ length: m }, (_, j) => `x${i}_${j}`).join(" + ")} <= 1`);
  for (let j = 0; j < m; j++) rows.push(`${Array.from({ length: n }, (_, i) => `x${i}_${j}`).join(" + ")} <= 1`);
  if (held) rows.push(`x${a.root}_${b.root} = 1`);
  const text = `Minimize\n obj: ${objective.join("\n ")}\nSubject To\n${rows.map((row, k) => ` c${k}: ${row}`).join("\n")}\nBinary\n ${binary.join("\n ")}\nEnd`;
  const solution = highs.solve(text, { mip_rel_gap: 0, mip_abs_gap: 1e-10 });
  if (solution.Status !== "Optimal") throw new Error(`the reference solver answered ${solution.Status}`);
  return solution.ObjectiveValue + constant;
}

describe("edit distance against a mixed-integer program", () => {
  const random = seededRandom(408);
  const canonical = ([a, b]: readonly [PlainTree, PlainTree]) => [canonicalTree(a, 0), canonicalTree(b, 0)] as const;
  const unlike = [4, 5, 6, 7, 8, 9, 10].map((size) => {
    const other = Math.max(3, size - 1 + Math.floor(random() * 3));
    return [size, "unrelated", ...canonical([randomTree(random, size), randomTree(random, other)])] as const;
  });
  const alike = [12, 14, 16, 18, 20].map(
    (size) => [size, "near", ...canonical(population("near", size, 1, random)[0]!)] as const,
  );

  it.each([...unlike, ...alike])(
    "agrees to 1e-9 for trees of about %d nodes (%s), both presets and origin rules",
    (_size, _kind, a, b) => {
      for (const costs of [geometryCosts(2), structureCosts()]) {
        for (const origin of ["held", "free"] as const) {
          const answer = editDistance(a, b, costs, origin);
          expect(answer.exact).toBe(true);
          expect(Math.abs(answer.ged - byMixedInteger(a, b, costs, origin === "held"))).toBeLessThan(1e-9 + 1e-11 * answer.ged);
        }
      }
    },
  );
});
