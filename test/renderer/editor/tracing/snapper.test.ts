import { describe, expect, it } from "vitest";
import { type Aim, choose, Snapper } from "#renderer/editor/tracing/snapper.ts";
import type { SnapCandidate } from "#shared/api/engine.ts";
import { pointMm } from "#shared/geometry/types.ts";

const aim = (change: Partial<Aim> = {}): Aim => ({
  at: pointMm(1, 2, 3),
  normal: [0, 0, 1],
  slabMm: 0.4,
  reachMm: 0.5,
  snap: true,
  candidate: 0,
  ...change,
});
const two: readonly SnapCandidate[] = [
  { point: pointMm(1.1, 2, 3.1), depthMm: 0.1, strength: 1 },
  { point: pointMm(1, 2, 2.8), depthMm: -0.2, strength: 0.6 },
];

describe("snapping", () => {
  it("takes the strongest string first, and the next ones in turn", () => {
    expect(choose(aim(), two)).toMatchObject({ point: [1.1, 2, 3.1], depthMm: 0.1, candidates: 2, candidate: 0 });
    expect(choose(aim({ candidate: 1 }), two)).toMatchObject({ depthMm: -0.2, candidate: 1 });
    expect(choose(aim({ candidate: 2 }), two)).toMatchObject({ depthMm: 0.1, candidate: 0 });
  });

  it("takes the place itself, rounded to 1e-6 mm, when there is no string or the snap is released", () => {
    expect(choose(aim({ at: pointMm(1.00000049, 2, 3) }), [])).toMatchObject({ point: [1, 2, 3], candidates: 0 });
    expect(choose(aim({ snap: false }), two)).toMatchObject({ point: [1, 2, 3], candidates: 0 });
  });

  it("knows the place for exactly the aim that was answered last", async () => {
    const snapper = new Snapper(async () => ({ candidates: two }));
    await snapper.aimAt(aim());
    expect(snapper.known(aim())?.point).toEqual([1.1, 2, 3.1]);
    expect(snapper.known(aim({ at: pointMm(1, 2, 3.5) }))).toBeNull();
  });

  it("keeps what it shows when a newer aim took over, and the place itself when the engine fails", async () => {
    const superseded = new Snapper(async () => null);
    expect(await superseded.aimAt(aim())).toBeNull();
    const failing = new Snapper(() => Promise.reject(new Error("no")));
    expect((await failing.aimAt(aim()))?.point).toEqual([1, 2, 3]);
  });

  it("shows nothing for an answer that comes after the pointer left", async () => {
    let answer!: (value: { candidates: readonly SnapCandidate[] }) => void;
    const snapper = new Snapper(() => new Promise((resolve) => (answer = resolve)));
    const aimed = snapper.aimAt(aim());
    snapper.leave();
    answer({ candidates: two });
    expect(await aimed).toBeNull();
    expect(snapper.snapped.value).toBeNull();
  });
});
