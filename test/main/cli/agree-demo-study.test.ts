import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import type { Agreement } from "#shared/agreement/study/agree.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";
import { readCsv } from "#shared/formats/tables/csv.ts";
import { DEMO_HABITS } from "#shared/phantom/annotator-habits.ts";
import { type DemoStudy, demoStudy, demoStudyFiles } from "#shared/phantom/demo-study.ts";
import { runVerb } from "#test/main/cli/run-verb.ts";
import {
  type Expected,
  expectedAgreementOnEnds,
  expectedDrift,
  expectedForkVariance,
  expectedOwnDifferences,
  expectedOwnPathSpread,
  expectedPathBias,
  expectedPathSpread,
  expectedRadii,
  expectedSegments,
  missableEnds,
  Z_GATE,
} from "#test/shared/phantom/habit-expectations.ts";

// The demo study's generator errs at known rates; `tautline agree`, given the tree files alone, has to find them. Every
// interval follows from binomial or normal sampling of the places where a mistake was possible (habit-expectations.ts), at
// 3.29 standard errors; the study's seed was fixed before. Where nothing was put in, the program's own 95 % interval has to
// hold 0 as well: that is so of this seed, and with other seeds of 19 in 20.

let folder: string;
let study: DemoStudy;
let found: Agreement;
let html: string;
let table: string;

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-demo-study-"));
  study = demoStudy();
  const paths: string[] = [];
  for (const { name, file } of demoStudyFiles(study)) {
    const path = join(folder, name);
    await writeFile(path, writeChordaeFile(file));
    paths.push(path);
  }
  const [out, items] = [join(folder, "report.html"), join(folder, "items.csv")];
  const { code, stdout } = await runVerb(["agree", ...paths, "--out", out, "--items", items, "--json"]);
  expect(code).toBe(0);
  found = JSON.parse(stdout) as Agreement;
  [html, table] = [await readFile(out, "utf8"), await readFile(items, "utf8")];
}, 240_000);

afterAll(() => rm(folder, { recursive: true, force: true }));

const ANNOTATORS = DEMO_HABITS.map(({ annotator }) => annotator);
const PAIRS = ANNOTATORS.flatMap((a, i) => ANNOTATORS.slice(i + 1).map((b) => [a, b] as const));
const mistakes = (event: string, annotator: string, pass = 1) =>
  study.mistakes.filter((one) => one.event === event && one.annotator === annotator && one.pass === pass);
const differences = (quantity: string, a: string, b: string) =>
  found.continuous.find((one) => one.quantity === quantity)!.blandAltman.find((one) => one.a === a && one.b === b)!;
const own = (annotator: string, quantity: string) =>
  found.own.find((one) => one.annotator === annotator && one.quantity === quantity)!;
const trees = () => study.specimens.reduce((sum, { truth }) => sum + truth.trees.length, 0);

function expectWithin(value: number, { value: expected, within }: Expected, allowance = 0): void {
  expect(within).toBeGreaterThan(0);
  expect(Math.abs(value - expected)).toBeLessThanOrEqual(within + allowance);
}

describe("tautline agree on the demo study", () => {
  it("finds what each annotator missed: every single one, at the rate that was put in", () => {
    const trueEnds = study.specimens
      .flatMap(({ truth }) => truth.trees.flatMap(({ nodes }) => nodes))
      .filter(({ kind }) => kind === "insertion").length;
    const missable = missableEnds(study);
    for (const { annotator, missed } of DEMO_HABITS) {
      const marked = found.totals
        .flatMap(({ passes }) => passes)
        .filter((one) => one.annotator === annotator && one.pass === 1)
        .reduce((sum, { insertions }) => sum + insertions, 0);
      expect(trueEnds - marked).toBe(mistakes("missed-branch", annotator).length);
      const error = Math.sqrt((missed * (1 - missed)) / missable);
      expectWithin((trueEnds - marked) / missable, { value: missed, within: Z_GATE * error });
    }
  });

  it.each(PAIRS)("finds the positive agreement on ends that misses and short ends leave: %s, %s", (a, b) => {
    const pair = found.detection.ends.pairs.find((one) => one.a === a && one.b === b)!;
    expectWithin(pair.value!, expectedAgreementOnEnds(study, a, b));
  });

  it("estimates by capture and recapture the share of ends that each annotator set", () => {
    const { captureRecapture } = found.detection.ends;
    const ends = study.specimens
      .flatMap(({ truth }) => truth.trees.flatMap(({ nodes }) => nodes))
      .filter(({ kind }) => kind !== "fork" && kind !== "origin").length;
    const missable = missableEnds(study);
    const shorts = mistakes("short-end", "AN-3").length;
    DEMO_HABITS.forEach(({ missed }, j) => {
      // Ends of AN-3 beyond the tolerance stand as ends of their own, so they add to what there seems to be.
      const seeming = ends + shorts;
      const error = Math.sqrt(missable * missed * (1 - missed)) / seeming;
      // Missed by all three: 97 x 0.2 x 0.05 x 0.1 = 0.1 ends, which nothing can tell.
      expectWithin(
        captureRecapture.sensitivity[j]!,
        { value: (ends - missable * missed) / seeming, within: Z_GATE * error },
        0.005,
      );
    });
  });

  it("finds the spread and the bias of forks in how far apart their places are", () => {
    const forks = found.nodePlaces.find(({ type }) => type === "fork")!;
    const variance = forks.sdPerAxis!.reduce((sum, sd) => sum + sd ** 2, 0);
    expectWithin(variance, expectedForkVariance(study));
  });

  it("finds that one annotator ends strands early, and by how much", () => {
    const { bias, readings } = differences("path length", "AN-1", "AN-2");
    expectWithin(bias!, expectedPathBias("AN-1", "AN-2", readings, trees()));
    expect(differences("path length", "AN-1", "AN-2").biasInterval!.low).toBeGreaterThan(0);
  });

  it("finds no difference in path length where none was put in", () => {
    const { bias, biasInterval, readings } = differences("path length", "AN-1", "AN-3");
    // AN-3 moves forks by 0.4 mm: over a reach of 2.5 mm that adds up to pi^2 d^2 / (16 x 2.5) = 0.04 mm to a path (second order).
    expectWithin(bias!, expectedPathBias("AN-1", "AN-3", readings, trees()), 0.04);
    expect(biasInterval!.low).toBeLessThan(0);
    expect(biasInterval!.high).toBeGreaterThan(0);
  });

  it("finds how much path lengths scatter between annotators, and less within them", () => {
    const between = differences("path length", "AN-1", "AN-3");
    expectWithin(between.sd!, expectedPathSpread("AN-1", "AN-3", between.readings, trees()));
    for (const annotator of ["AN-1", "AN-3"]) {
      const { drift, rows } = own(annotator, "path length");
      expectWithin(drift.sd!, expectedOwnPathSpread(annotator, rows, trees()));
      expect(drift.sd!).toBeLessThan(between.sd!);
    }
  });

  it("finds the drift that one annotator has, and none in the others", () => {
    for (const annotator of ANNOTATORS) {
      const { drift, rows } = own(annotator, "path length");
      expectWithin(drift.bias!, expectedDrift(annotator, rows, trees()));
      const { low, high } = drift.biasInterval!;
      if (annotator === "AN-2") expect(high).toBeLessThan(0);
      else expect(low < 0 && high > 0).toBe(true);
    }
  });

  it("finds what an annotator decides otherwise the second time", () => {
    for (const annotator of ANNOTATORS) {
      const repeats = found.intra.filter((one) => one.annotator === annotator);
      expect(repeats).toHaveLength(5);
      const differ = repeats.reduce((sum, { ends }) => sum + ends.onlyOne, 0);
      expectWithin(differ, expectedOwnDifferences(study, annotator));
      for (const { days } of repeats) expect(days).toBe(35);
    }
  });

  it.each(PAIRS)("finds how often segments are mistaken: %s, %s", (a, b) => {
    const segment = found.categorical.find(({ label, absentCounts }) => label === "segment" && !absentCounts)!;
    const { table: counts, plain } = segment.cohen.find((one) => one.a === a && one.b === b)!;
    const items = counts.flat().reduce((sum, count) => sum + count, 0);
    const { same, kappa } = expectedSegments(study, a, b, items);
    expectWithin(plain.observed!, same);
    expectWithin(plain.value!, kappa);
  });

  it("finds no difference in labels that nobody mistook", () => {
    for (const name of ["leaflet", "zone", "kind of end", "muscle"]) {
      const label = found.categorical.find(({ label: one, absentCounts }) => one === name && !absentCounts)!;
      expect(label.alphaNominal.value).toBeCloseTo(1, 12);
      for (const { plain } of label.cohen) expect(plain.observed).toBeCloseTo(1, 12);
    }
  });

  it("finds radii read large, more so the thicker the string, and none where none are", () => {
    const large = differences("mean radius", "AN-1", "AN-3");
    const expected = expectedRadii(study, "AN-1", "AN-3");
    expectWithin(large.bias!, expected.bias);
    expectWithin(large.slope!, expected.slope);
    expect(large.biasInterval!.high).toBeLessThan(0);
    expect(large.slopeInterval!.high).toBeLessThan(0);
    const none = differences("mean radius", "AN-1", "AN-2");
    expectWithin(none.bias!, expectedRadii(study, "AN-1", "AN-2").bias);
    expect(none.biasInterval!.low < 0 && none.biasInterval!.high > 0).toBe(true);
    expect(none.slopeInterval!.low < 0 && none.slopeInterval!.high > 0).toBe(true);
  });

  it("names every exchange of tails at a crossing, and none between annotators who made none", () => {
    const events = (a: string, b: string) =>
      found.pairwise
        .filter((one) => one.a === a && one.b === b)
        .reduce((sum, { events: counts }) => sum + (counts["exchanged-tails"] ?? 0), 0);
    const made = mistakes("exchanged-tails", "AN-2").length;
    expect(made).toBeGreaterThan(0);
    expect(events("AN-1", "AN-2")).toBe(made);
    expect(events("AN-2", "AN-3")).toBe(made);
    expect(events("AN-1", "AN-3")).toBe(0);
  });

  it("writes the item table beside the report", () => {
    const rows = readCsv(table, "items.csv");
    const ends = rows.filter(({ kind, marked }) => kind === "node" && marked === "1");
    expect(ends.length).toBeGreaterThan(1000);
    expect(new Set(rows.map(({ specimen }) => specimen)).size).toBe(5);
  });

  it("writes a report that holds everything in itself, cautions first, totals before all other numbers", () => {
    expect(html).toMatch(/^<!doctype html>/);
    expect(html).not.toMatch(/<script|<link|<img|src=|href="(?!#)|url\(/i);
    const order = [
      "Research use only",
      "What this is",
      "Totals of each specimen",
      "Did they mark the same things",
      "Lengths, radii and angles",
      "Reporting guideline",
    ];
    const at = order.map((words) => html.indexOf(words, html.indexOf("<body>")));
    expect(at.every((place) => place > 0)).toBe(true);
    expect(html.indexOf("Synthetic:")).toBeGreaterThan(0);
    expect(html.indexOf('id="totals"')).toBeLessThan(html.indexOf('id="items"'));
    const words = html.replace(/<style>[\s\S]*?<\/style>/g, "").replace(/<[^>]*>/g, " ");
    expect(words.match(/\b(NaN|undefined|Infinity|null|object Object)\b/g)).toBeNull();
  });
});
