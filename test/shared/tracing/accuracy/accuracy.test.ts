import { afterAll, describe, expect, it } from "vitest";
import { TRIAL_VOLUMES } from "#shared/phantom/trials/trial-volumes.ts";
import {
  accuracyRows,
  measureVolume,
  seedsFor,
  tableLines,
  type VolumeAccuracy,
} from "#test/shared/tracing/accuracy/accuracy-table.ts";

/**
 * Seeds that the program was not developed on; those of development are 101 to 199. At their first run two rows were missed (radius with
 * a bright rim 5.1 %, one of two faint strings not followed); what mended them was developed on 141 to 156.
 */
const FIRST_SEED = 901;

// Every volume is solved from clicks on its nodes alone, each up to a quarter of a radius beside the axis. Limits: what was asked of the
// program (see accuracy-table.ts); truth: the analytic lines that the solids were swept along.
describe("strands solved in trial volumes", () => {
  const all: VolumeAccuracy[] = [];

  for (const volume of TRIAL_VOLUMES)
    it(`are followed: ${volume.about}`, { timeout: 600_000 }, () => {
      const one = measureVolume(volume, seedsFor(volume, FIRST_SEED));
      all.push(one);
      expect(one.strands.every((strand) => strand.followed)).toBe(true);
      expect(one.strands.every((strand) => strand.points > 10)).toBe(true);
    });

  it("reach the accuracy asked for", () => {
    expect(all.length).toBe(TRIAL_VOLUMES.length);
    const missed = accuracyRows(all).filter((row) => !row.holds);
    expect(missed).toEqual([]);
  });

  afterAll(() => console.log(tableLines(all).join("\n")));
});
