import { describe, expect, it } from "vitest";
import type { Vec3 } from "#shared/geometry/types.ts";
import { roundPoint } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { followString, followWhole } from "#shared/tracing/follow/follow-string.ts";
import { solveStrand } from "#shared/tracing/solve-strand.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { placesOf } from "#test/shared/tracing/follow/phantom-scan.ts";
import { curve, drawTubes, line, type Phantom } from "#test/shared/tracing/tube-phantom.ts";

// The strings are drawn by a phantom that shares no code with the tracer; lengths and places are those it was drawn from.
const S = 0.04;
const SIZE = [88, 64, 56] as const;
const PARAMETERS = { polarity: "bright", blurFwhmMm: 0.07 } as const;
const FORK: Vec3 = [1.5, 1.28, 1.12];
const trunk = curve((t): Vec3 => [-0.4 + 1.9 * t, 1.28 + 0.06 * Math.sin(3 * t), 1.12]);
const left = curve((t): Vec3 => [1.5 + 1.5 * t, 1.28 + 0.85 * t, 1.12 + 0.2 * t]);
const right = curve((t): Vec3 => [1.5 + 1.55 * t, 1.28 - 0.8 * t, 1.12 - 0.15 * t]);

function fork(order: readonly [0 | 1 | 2, 0 | 1 | 2, 0 | 1 | 2] = [0, 1, 2]): Phantom {
  const turn = (p: Vec3): Vec3 => [p[order[0]], p[order[1]], p[order[2]]];
  const size = [SIZE[order[0]], SIZE[order[1]], SIZE[order[2]]] as const;
  const tubes = [trunk, left, right].map((points, n) => ({ points: points.map(turn), radius: () => (n === 0 ? 0.13 : 0.1) }));
  return drawTubes(size, [S, S, S], tubes, { fwhmMm: 0.07, noise: 0.08, seed: 5 });
}

const scanOf = (phantom: Phantom) => memoryPyramid(phantom.grid, phantom.voxels);
const contextOf = (scan: ReturnType<typeof scanOf>) => createTraceContext(scan, "bright");

describe("a run from one click", () => {
  const scan = scanOf(fork());
  const context = contextOf(scan);
  const proposal = followWhole(scan, context, PARAMETERS, left[300]!)!;

  it("proposes a tree of three strands with one fork", () => {
    expect(proposal.strands).toHaveLength(3);
    const forks = proposal.nodes.filter(({ kind }) => kind === "fork");
    expect(forks).toHaveLength(1);
    expect(distance(forks[0]!.position, FORK)).toBeLessThan(0.26);
    const length = 1.9 + Math.hypot(1.5, 0.85, 0.2) + Math.hypot(1.55, 0.8, 0.15);
    // The trunk begins outside the scan: 0.4 mm of it cannot be seen.
    expect(Math.abs(proposal.lengthMm - (length - 0.4))).toBeLessThan(0.35);
  });

  it("calls an end where the string leaves the scan by its name, and doubts an origin that is not in muscle", () => {
    const root = proposal.nodes.find(({ id }) => id === proposal.root)!;
    expect(root.kind).toBe("origin");
    expect(root.certainty).toBe("doubtful");
    const edge = proposal.nodes.find(({ reason }) => reason === "scan-edge")!;
    expect(edge.position[0]).toBeLessThan(0.1);
    const free = proposal.nodes.filter(({ reason }) => reason === "faint");
    expect(free).toHaveLength(2);
    for (const node of free) expect(node.certainty).toBe("doubtful");
  });

  it("says where the click fell", () => {
    const strand = proposal.strands.find(({ id }) => id === proposal.clicked.strand)!;
    expect(distance(placesOf(strand.points)[proposal.clicked.point]!, left[300]!)).toBeLessThan(0.06);
  });

  it("gives strands that are exactly those traced through their pins", () => {
    for (const strand of proposal.strands) {
      const from = proposal.nodes.find(({ id }) => id === strand.from)!.position;
      const to = proposal.nodes.find(({ id }) => id === strand.to)!.position;
      const traced = solveStrand(scan, { from, via: strand.via, to }, PARAMETERS);
      expect(strand.points).toEqual(Array.from(traced.points));
    }
  });

  it("is the same however it is interrupted, and whatever was computed before", () => {
    const fresh = contextOf(scan);
    followWhole(scan, fresh, PARAMETERS, right[450]!);
    const run = followString(scan, fresh, PARAMETERS, left[300]!);
    let shown = 0;
    for (let step = run.next(); ; step = run.next()) {
      if (step.done) {
        expect(step.value).toEqual(proposal);
        break;
      }
      for (const flat of step.value.lines()) expect(flat.every(Number.isFinite)).toBe(true);
      shown++;
    }
    expect(shown).toBeGreaterThan(2);
  });

  it("stops at once when it is told to", () => {
    const signal = { aborted: false };
    const run = followString(scan, context, PARAMETERS, left[300]!, { signal });
    run.next();
    signal.aborted = true;
    expect(() => run.next()).toThrow(expect.objectContaining({ tag: "cancelled" }));
  });

  it("stops at a strand that is traced already, and says which", () => {
    const traced = [right.filter((_, i) => i % 20 === 0).flat(), trunk.filter((_, i) => i % 20 === 0).flat()];
    const branch = followWhole(scan, context, PARAMETERS, left[400]!, { traced })!;
    expect(branch.strands).toHaveLength(1);
    const meeting = branch.nodes.filter(({ reason }) => reason === "traced");
    expect(meeting).toHaveLength(1);
    expect(meeting[0]!.meets).not.toBeNull();
    expect(distance(meeting[0]!.position, FORK)).toBeLessThan(0.6);
  });

  it("proposes nothing where there is no string", () => {
    expect(followWhole(scan, context, PARAMETERS, [3, 1.28, 1.12])).toBeNull();
  });

  it("finds the same when the scan lies on another side", () => {
    const turned = scanOf(fork([1, 2, 0]));
    const at = left[300]!;
    const other = followWhole(turned, contextOf(turned), PARAMETERS, [at[1], at[2], at[0]])!;
    expect(other.strands).toHaveLength(3);
    // Two voxels: noise falls differently on the turned string.
    expect(Math.abs(other.lengthMm - proposal.lengthMm)).toBeLessThan(0.16);
    const [one, two] = [proposal, other].map(({ nodes }) => nodes.find(({ kind }) => kind === "fork")!.position);
    expect(distance([one![1], one![2], one![0]], two!)).toBeLessThan(0.08);
  });
});

describe("two strings that cross and touch", () => {
  it("are told apart: the clicked one runs straight on, and the place is doubtful", () => {
    const one = line([0.3, 1.2, 1.0], [3.2, 1.2, 1.2]);
    const other = line([1.7, 0.2, 1.3], [1.8, 2.4, 1.33]);
    const tubes = [one, other].map((points) => ({ points, radius: () => 0.1 }));
    const scan = scanOf(drawTubes(SIZE, [S, S, S], tubes, { fwhmMm: 0.07, noise: 0.05, seed: 6 }));
    const proposal = followWhole(scan, contextOf(scan), PARAMETERS, one[40]!)!;
    expect(proposal.strands).toHaveLength(1);
    expect(Math.abs(proposal.lengthMm - 2.91)).toBeLessThan(0.3);
    expect(proposal.strands[0]!.doubtful.map(({ reason }) => reason)).toContain("touches");
  });
});

describe("a dark string", () => {
  it("is followed like a bright one", () => {
    const points = line([0.4, 1.2, 1.1], [3.1, 1.4, 1.1]);
    const tubes = [{ points, radius: () => 0.1 }];
    const scan = scanOf(drawTubes(SIZE, [S, S, S], tubes, { fwhmMm: 0.07, noise: 0.05, scale: -600, offset: 2000 }));
    const proposal = followWhole(
      scan,
      createTraceContext(scan, "dark"),
      { polarity: "dark", blurFwhmMm: null },
      roundPoint(points[100]!),
    )!;
    expect(proposal.strands).toHaveLength(1);
    // The drawn tube has round ends: it is two radii longer than its line. Three voxels of tolerance.
    expect(Math.abs(proposal.lengthMm - (Math.hypot(2.7, 0.2) + 0.2))).toBeLessThan(0.12);
  });
});
