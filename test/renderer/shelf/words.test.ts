import { expect, test } from "vitest";
import {
  bytesWords,
  countWords,
  factsWords,
  keptWords,
  passWords,
  sidesWords,
  spacingWords,
  timeLeftWords,
  voxelsWords,
  workWords,
} from "#renderer/shelf/words.ts";
import { passOf } from "#test/browser/shelf/page/made-up-shelf.ts";

/** With ordinary spaces, for reading. */
const plain = (text: string | null) => text?.replace(/[\u00a0\u202f]/g, " ");

// The sentence of the program's own description: "1 040 x 1 040 x 1 310 voxels of 40 um: 41.6 x 41.6 x 52.4 mm".
test("a scan's size stands in words a person can check", () => {
  const size = [1040, 1040, 1310];
  expect(plain(`${voxelsWords(size)} of ${spacingWords([0.04, 0.04, 0.04])}: ${sidesWords(size, [0.04, 0.04, 0.04])}`)).toBe(
    "1 040 × 1 040 × 1 310 voxels of 40 µm: 41.6 × 41.6 × 52.4 mm",
  );
});

test("voxels that are not cubes show three numbers, and none loses its digits", () => {
  expect(plain(spacingWords([0.0325, 0.0325, 0.05]))).toBe("32.5 × 32.5 × 50 µm");
  expect(plain(spacingWords([0.012345, 0.012345, 0.012345]))).toBe("12.345 µm");
  expect(plain(sidesWords([10, 10, 10], [0.004, 0.04, 40_000]))).toBe("0.04 × 0.4 × 400 000 mm");
});

test("thousands are set apart from four digits on", () => {
  expect([0, 999, 1000, 12_345_678].map((n) => plain(countWords(n)))).toEqual(["0", "999", "1 000", "12 345 678"]);
});

test("a pass says its trees, open ends, doubts, edits and time at work; what is zero stays unsaid", () => {
  expect(plain(passWords(passOf("a", "AN-1")))).toBe("14 trees, 3 open ends, 2 doubts, 1 204 edits, 2 h 10 min");
  const fresh = passOf("a", "AN-1", { trees: 0, openEnds: 0, doubts: 0, edits: 0, workMs: 0 });
  expect(plain(passWords(fresh))).toBe("0 trees, no edits yet");
  expect(plain(passWords({ ...fresh, trees: 1, doubts: 1, edits: 1, workMs: 20_000 }))).toBe(
    "1 tree, 1 doubt, 1 edit, less than a minute",
  );
});

test("times and sizes are rounded to what a person uses", () => {
  expect([0, 59_999, 60_000, 3_600_000, 7_800_000].map((ms) => plain(workWords(ms)))).toEqual([
    "no time yet",
    "1 min",
    "1 min",
    "1 h",
    "2 h 10 min",
  ]);
  expect([null, 3, 33, 600].map((s) => plain(timeLeftWords(s)) ?? null)).toEqual([
    null,
    "a few seconds left",
    "35 s left",
    "10 min left",
  ]);
  expect([512, 1200, 118e6, 2.834e9].map((b) => plain(bytesWords(b)))).toEqual(["512 bytes", "1.2 KB", "118 MB", "2.8 GB"]);
});

test("facts that nobody gave leave no gap", () => {
  expect(plain(factsWords({ species: "porcine", pressure: 0, state: "" }))).toBe("porcine · 0 mmHg");
  expect(factsWords({})).toBe("");
});

test("what was kept of a scan and how is said only where it is not a plain copy of the whole", () => {
  expect(keptWords({})).toBe("");
  const whole = { sha256: "0".repeat(64), crop: [0, 0, 0, 4, 4, 4] };
  expect(keptWords({ derivedFrom: { ...whole, bin: 1 } })).toBe("part of a scan");
  expect(keptWords({ derivedFrom: { ...whole, bin: 2 }, packing: "gzip" })).toBe("part of a scan, 2 times as coarse · packed");
  const inPlace = {
    path: "/a",
    array: "0",
    metadata: "zarr.json",
    selection: [null, null, null],
    files: 1,
    bytes: 1,
    changed: 0,
  } as const;
  expect(keptWords({ inPlace })).toBe("used where it lies");
});
