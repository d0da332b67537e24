import { beforeAll, describe, expect, it } from "vitest";
import { type Walk, walkDemoValve, walkTable } from "#test/browser/robot-walk.ts";
import { interactions } from "#test/tools/tracing-robot/effort.ts";

/** A tree with a fork in three, and one with a ruptured end. The benchmark walks through all. */
const TREES = ["ALPM-04", "ALPM-10"];
/** Millimetres. */
const VOXEL = 0.1;
/** Clicks and keys a node: own bound; a click or key each is what the desk asks for where the image is clear. */
const MOST_A_NODE = 2.5;

describe("the robot annotator in the real page", () => {
  let walk: Walk;

  beforeAll(async () => {
    walk = await walkDemoValve(TREES);
    console.log(walkTable(walk).join("\n"));
  }, 600_000);

  it("draws trees of the demo valve in their true structure, by the program's own comparison", () => {
    expect(walk.trees.map(({ name, ged }) => ({ name, ged }))).toEqual(TREES.map((name) => ({ name, ged: 0 })));
  });

  it("keeps within a voxel of the true centrelines on average", () => {
    for (const { meanMm } of walk.trees) expect(meanMm).toBeLessThan(VOXEL);
  });

  it("needs few clicks and keys a node", () => {
    for (const { nodes, effort } of walk.trees) expect(interactions(effort) / nodes).toBeLessThanOrEqual(MOST_A_NODE);
  });

  it("met no fault on the way", () => {
    expect(walk.faults).toEqual([]);
  });
});
