import { describe, expect, it } from "vitest";
import { type AgreeOptions, agree, agreementFrame } from "#shared/agreement/study/agree.ts";
import { itemsCsv } from "#shared/agreement/study/items-csv.ts";
import { type StudyFile, studyOf } from "#shared/agreement/study/study.ts";
import { readCsv } from "#shared/formats/tables/csv.ts";
import { blockPhantom } from "#shared/phantom/block-phantom.ts";
import { type HumanError, humanPasses } from "#shared/phantom/human-passes.ts";

const OPTIONS: AgreeOptions = {
  compare: { preset: "geometry", origin: "held", positionScale: 2, merge: 0.3, tolerance: 0.5, minimumDiameter: null },
  method: null,
  margin: null,
  sameEngine: false,
  declinedByAll: 0,
  seed: 1,
};

/** Five small synthetic specimens, three annotators, two passes; the generator lists the mistakes that it put in. */
function demoStudy(): { files: StudyFile[]; errors: HumanError[][] } {
  const files: StudyFile[] = [];
  const errors: HumanError[][] = [];
  for (const seed of [8, 9, 10, 11, 12]) {
    const specimen = blockPhantom({ name: `HB-${seed}`, seed, size: [128, 128, 128], spacingMm: 0.1, trees: 4, noise: 0.05 });
    for (const pass of [1, 2]) {
      const made = humanPasses(specimen, 100 * seed + pass);
      if (pass === 1) errors.push(made.errors);
      for (const one of made.passes)
        files.push({
          name: `hb-${seed}-${one.annotator}-${pass}`,
          file: { ...one.file, pass, created: `2026-0${2 * pass}-01T00:00:00Z` },
        });
    }
  }
  return { files, errors };
}

const { files, errors } = demoStudy();
const first = files.filter(({ file }) => file.pass === 1);
const frameOf = (chosen: readonly StudyFile[], more: Partial<AgreeOptions> = {}) =>
  agreementFrame(studyOf(chosen, 0.3, more.method ?? null), { ...OPTIONS, ...more });
const amounts = (event: HumanError["event"]) => errors.map((list) => list.filter((one) => one.event === event));

/** Keys that are null where they do not apply, which is no missing statistic. */
const NOT_APPLICABLE = new Set([
  "conditionalOn",
  "coverage",
  "linear",
  "quadratic",
  "alphaOrdinal",
  "ac2",
  "margin",
  "created",
  "perSpecimen",
]);

/** Places of numbers that are none, and of nulls without a sentence in the same object. */
function faults(value: unknown, at = ""): string[] {
  if (typeof value === "number") return Number.isFinite(value) ? [] : [at];
  if (value === undefined) return [at];
  if (typeof value !== "object" || value === null) return [];
  const reasons = (value as { reasons?: Record<string, string> }).reasons ?? {};
  return Object.entries(value).flatMap(([key, inner]) => {
    if (inner === null && !Array.isArray(value) && !NOT_APPLICABLE.has(key) && !reasons[key]) return [`${at}.${key}`];
    return faults(inner, `${at}.${key}`);
  });
}

describe("the agreement of a study", () => {
  const begun = performance.now();
  const found = agree(files, OPTIONS, () => 40_000 - (performance.now() - begun));

  it("finds the branches that the generator left out", () => {
    const missed = amounts("missed-branch").flat().length;
    expect(missed).toBeGreaterThan(0);
    const pair = found.detection.ends.pairs.find(({ a, b }) => a === "AN-1" && b === "AN-2")!;
    expect(pair.onlyOne).toBe(missed);
    const ends = pair.both + missed;
    expect(pair.value).toBeCloseTo((2 * (ends - missed)) / (2 * ends - missed), 12);
  });

  it("finds the ends that the generator made short beyond the tolerance, on both sides", () => {
    const short = amounts("short-end")
      .flat()
      .filter((one) => one.amount > 1).length;
    const pair = found.detection.ends.pairs.find(({ a, b }) => a === "AN-2" && b === "AN-3")!;
    expect(short).toBeGreaterThan(0);
    expect(pair.onlyOne).toBe(2 * short);
  });

  it("finds the length that was missed in the totals of each specimen", () => {
    const lengths = found.continuous.find(({ quantity }) => quantity === "total length")!;
    const bias = lengths.blandAltman.find(({ a, b }) => a === "AN-1" && b === "AN-2")!.bias!;
    const missed = amounts("missed-branch")
      .flat()
      .reduce((sum, one) => sum + one.amount, 0);
    // hands sway by 0.03 mm, which makes lines longer by a few tenths
    expect(Math.abs(bias + missed / errors.length)).toBeLessThan(0.6);
  });

  it("finds how far forks were moved in the spread of their places", () => {
    const forks = found.nodePlaces.find(({ type }) => type === "fork")!;
    const squares = amounts("moved-fork")
      .flat()
      .reduce((sum, one) => sum + 2 * one.amount ** 2, 0);
    expect(squares).toBeGreaterThan(0);
    // own derivation: each moved fork is that far off in two of an item's three pairs; hands add their sway
    const expected = Math.sqrt(squares / (3 * forks.items));
    expect(forks.rmsDistance!).toBeGreaterThan(0.9 * expected);
    expect(forks.rmsDistance!).toBeLessThan(1.2 * expected + 0.06);
  });

  it("finds no difference in labels, which the generator did not change", () => {
    const segment = found.categorical.find(({ label, absentCounts }) => label === "segment" && !absentCounts)!;
    expect(segment.alphaNominal.value).toBeCloseTo(1, 12);
    expect(segment.ac1.value).toBeCloseTo(1, 12);
    for (const { plain } of segment.cohen) expect(plain.value).toBeCloseTo(1, 12);
    const withAbsent = found.categorical.find(({ label, absentCounts }) => label === "segment" && absentCounts)!;
    expect(withAbsent.alphaNominal.value!).toBeLessThan(1);
  });

  it("tells each annotator's repeats apart from the others', with the days between", () => {
    expect(found.intra).toHaveLength(15);
    for (const one of found.intra) expect(one).toMatchObject({ days: 59, passes: [1, 2] });
    const own = found.intra.filter(({ annotator }) => annotator === "AN-2");
    // AN-2 exchanges tails, in both passes alike: strands agree
    for (const one of own) expect(one.strands.value).toBe(1);
    expect(found.passes.filter(({ role }) => role === "repeat")).toHaveLength(15);
  });

  it("finds no drift where the generator put none, and says so for each annotator and quantity", () => {
    expect(found.own).toHaveLength(3 * found.continuous.length);
    for (const one of found.own.filter(({ quantity }) => quantity === "insertions")) expect(one.drift.bias).toBe(0);
    for (const one of found.own.filter(({ quantity }) => quantity === "strand length")) {
      // hands sway by 0.03 mm
      expect(Math.abs(one.drift.bias!)).toBeLessThan(0.05);
      expect(one.icc.forms[1]!.value!).toBeGreaterThan(0.99);
    }
  });

  it("compares each two annotators on each specimen, to the end", () => {
    expect(found.pairwise).toHaveLength(15);
    for (const pair of found.pairwise) expect(pair.exact).toBe(true);
  });

  it("says what each interval is conditional on, and calls five specimens weak", () => {
    const totals = found.continuous.find(({ quantity }) => quantity === "total length")!;
    const strands = found.continuous.find(({ quantity }) => quantity === "strand length")!;
    expect(totals.icc.forms[1]!.interval).toMatchObject({ conditionalOn: null, weak: true });
    expect(strands.icc.forms[1]!.interval!.conditionalOn).toBe("these valves");
    expect(strands.overSpecimens["ICC(A,1)"].jackknife!.weak).toBe(true);
    expect(strands.title).toBe("given that all 3 marked it");
  });

  it("gives results at three tolerances", () => {
    expect(found.items.atTolerances.map(({ toleranceMm }) => toleranceMm)).toEqual([0.25, 0.5, 1]);
    const shares = found.items.atTolerances.map(({ positiveAgreement }) => positiveAgreement!);
    expect(shares[0]!).toBeLessThanOrEqual(shares[1]!);
    expect(shares[1]!).toBeLessThanOrEqual(shares[2]!);
  });

  it("refuses specificity in words without candidates that all declined", () => {
    expect(found.detection.rates.best).toBeNull();
    expect(found.detection.rates.reasons.specificity).toContain("declined by all");
    expect(found.detection.strands.captureRecapture.sensitivity[1]).toBe(1);
  });

  it("holds no number that is none, and a sentence for everything that is missing", () => {
    expect(faults(found)).toEqual([]);
  });

  it("does not depend on the order of the files", () => {
    expect(frameOf([...first].reverse())).toEqual(frameOf(first));
  });
});

describe("a study with little in it", () => {
  const of = (names: readonly string[], annotators: readonly string[]) =>
    first.filter(({ file }) => names.includes(file.volume!.name!) && annotators.includes(file.annotator!));
  const ALL = ["AN-1", "AN-2", "AN-3"];

  it.each([
    ["one specimen", of(["HB-8"], ALL)],
    ["two specimens", of(["HB-8", "HB-9"], ALL)],
    ["two annotators", of(["HB-8", "HB-9"], ["AN-1", "AN-2"])],
    ["one annotator", of(["HB-8"], ["AN-1"])],
    ["nothing", []],
    ["a specimen that one annotator did not do", [...of(["HB-8"], ALL), ...of(["HB-9"], ["AN-1", "AN-3"])]],
    ["empty trees", of(["HB-8"], ALL).map(({ name, file }) => ({ name, file: { ...file, trees: [], crossLinks: [] } }))],
  ])("gives numbers or plain reasons: %s", (_, chosen) => {
    expect(faults(frameOf(chosen))).toEqual([]);
  });

  it("gives no interval on new specimens from two valves", () => {
    const two = frameOf(of(["HB-8", "HB-9"], ALL));
    for (const { overSpecimens, icc, on } of two.continuous) {
      expect(overSpecimens["ICC(A,1)"].jackknife).toBeNull();
      if (on === "specimen") for (const form of icc.forms) expect(form.interval).toBeNull();
    }
    expect(two.detection.strands.overSpecimens.range).not.toBeNull();
    expect(two.detection.strands.overSpecimens.reasons.jackknife).toContain("there are 2");
  });

  it("counts complete rows and says who is missing", () => {
    const gap = frameOf([...of(["HB-8"], ALL), ...of(["HB-9"], ["AN-1", "AN-3"])]);
    expect(gap.notes).toContain("HB-9 was not done by AN-2: its rows are incomplete.");
    expect(gap.continuous.find(({ quantity }) => quantity === "total length")).toMatchObject({ rows: 2, completeRows: 1 });
  });

  it("refuses two files that claim to be the same pass, and frames that differ", () => {
    const [one] = of(["HB-8"], ["AN-1"]);
    expect(() => frameOf([one!, { ...one!, name: "again" }])).toThrow(/both claim to be pass 1 of AN-1/);
    const turned = { name: "turned", file: { ...one!.file, annotator: "AN-9", frame: "scan" as const } };
    expect(() => frameOf([one!, turned])).toThrow(/frame/);
  });
});

describe("a method against the annotators", () => {
  const asMethod = first
    .filter(({ file }) => file.annotator === "AN-3")
    .map(({ name, file }) => ({ name, file: { ...file, annotator: "method" } }));
  const people = first.filter(({ file }) => file.annotator !== "AN-3");

  it("is compared specimen by specimen and takes no part in the items", () => {
    const found = frameOf([...people, ...asMethod], { method: "method", margin: 5 });
    expect(found.annotators).toEqual(["AN-1", "AN-2"]);
    expect(found.method!.perSpecimen).toHaveLength(5);
    expect(found.method!.distances.verdict).toBe("equivalent");
    expect(found.method!.squared.verdict).toBeNull();
    expect(faults(found)).toEqual([]);
    expect(found.detection).toEqual(frameOf(people).detection);
  });

  it("gets no verdict without a margin", () => {
    const found = frameOf([...people, ...asMethod], { method: "method" });
    expect(found.method!.distances.verdict).toBeNull();
    expect(found.method!.distances.reasons.verdict).toContain("no margin");
  });
});

describe("the item table", () => {
  it("has a row for each item and pass, also where the pass has none", () => {
    const rows = readCsv(itemsCsv(first, 0.5, 0.3, null), "items.csv");
    const strands = rows.filter(({ kind, specimen }) => kind === "strand" && specimen === "HB-8");
    const items = new Set(strands.map(({ item }) => item));
    expect(strands).toHaveLength(3 * items.size);
    const marked = strands.filter(({ marked: one }) => one === "1");
    expect(marked.every(({ id, length_mm }) => id !== "" && Number(length_mm) > 0)).toBe(true);
    expect(marked.length).toBeLessThan(strands.length);
  });
});
