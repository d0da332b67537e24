import { expect, test } from "vitest";
import { partOf, wholeDraft } from "#renderer/shelf/add-scan/part-draft.ts";
import { draftOf, intakeOf } from "#renderer/shelf/add-scan/scan-draft.ts";
import { lookOf } from "#test/browser/shelf/page/made-up-shelf.ts";

const SIZE = [1040, 1040, 1310] as const;
const { info } = lookOf(true);
const boxOf = (...edges: string[]) => ({ isBox: true, edges, isBinned: false });
const sent = (change: object, readings?: { channels: number; times: number }) =>
  intakeOf("/scans/a.nrrd", info, { ...draftOf(info, "bright"), ...change }, readings);

test("a scan is taken in whole unless the person says otherwise", () => {
  expect(partOf(SIZE, wholeDraft(SIZE))).toEqual({ region: null });
  expect(partOf(SIZE, { ...wholeDraft(SIZE), isBox: true })).toEqual({ region: null });
  const order = sent({});
  expect("request" in order && ["region", "keep", "channel", "time"].filter((key) => key in order.request)).toEqual([]);
});

test("a typed box and halving go out as numbers", () => {
  const part = { ...boxOf("10", "20", "0", "500", "1040", "900"), isBinned: true };
  expect(sent({ part })).toMatchObject({ request: { region: { crop: [10, 20, 0, 500, 1040, 900], bin: 2 } } });
  // A box that is switched off counts for nothing.
  expect(sent({ part: { ...part, isBox: false } })).toMatchObject({ request: { region: { crop: [0, 0, 0, ...SIZE], bin: 2 } } });
});

test.each([
  [["", "0", "0", "5", "5", "5"], "‘x from’ is a whole number of voxels, found ‘’"],
  [["0", "0", "0", "5", "5.5", "5"], "‘y to’ is a whole number of voxels, found ‘5.5’"],
  [["0", "0", "0", "5", "5", "1311"], "edges from 0 to 1310 along z, found 0 to 1311"],
  [["7", "0", "0", "7", "5", "5"], "an end after the beginning along x"],
])("a box of %j is refused with its reason, and nothing is sent", (edges, sentence) => {
  const order = sent({ part: boxOf(...edges) });
  expect("missing" in order && order.missing.join(" ")).toContain(sentence);
});

test("a store is used in place only as a whole and unmirrored", () => {
  expect(sent({ keep: "in-place" })).toMatchObject({ request: { keep: "in-place" } });
  expect(sent({ keep: "packed" })).toMatchObject({ request: { keep: "packed" } });
  for (const change of [{ handedness: "mirrored" }, { part: { ...wholeDraft(SIZE), isBinned: true } }]) {
    const order = sent({ keep: "in-place", ...change });
    expect("request" in order && "keep" in order.request).toBe(false);
  }
});

test("of several channels or time points the person has to choose one", () => {
  const readings = { channels: 3, times: 2 };
  expect(sent({}, readings)).toEqual({ missing: ["Choose which of the scan's volumes is taken in."] });
  expect(sent({ channel: 0 }, readings)).toHaveProperty("missing");
  expect(sent({ channel: 0, time: 1 }, readings)).toMatchObject({ request: { channel: 0, time: 1 } });
  expect(sent({ channel: 2 }, { channels: 3, times: 1 })).toMatchObject({ request: { channel: 2 } });
});
