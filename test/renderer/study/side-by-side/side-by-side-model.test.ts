import { afterEach, describe, expect, it } from "vitest";
import type { Services } from "#renderer/app/services.ts";
import { pairStrands } from "#renderer/study/side-by-side/pair-scene.ts";
import { SideBySideModel, TOLERANCE_MM } from "#renderer/study/side-by-side/side-by-side-model.ts";
import type { Side } from "#renderer/study/side-by-side/sides.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { compareSets } from "#shared/compare/compare-sets.ts";
import type { CompareOptions, Comparison } from "#shared/compare/comparison.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { documentFromFile } from "#shared/formats/chordae/document-from-file.ts";
import { polylineLength } from "#shared/geometry/polyline.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { demoValve } from "#shared/phantom/demo-valve.ts";
import { plainFromDocument } from "#shared/trees/plain-from-document.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { FakeWorker } from "#test/renderer/study/side-by-side/fake-worker.ts";

const valve = demoValve();
const sideOf = (label: string, file: ChordaeFile): Side => {
  const document = documentFromFile(file);
  return { label, document, plain: plainFromDocument(document), caution: null };
};
const truth = sideOf("true trees", valve.truth as ChordaeFile);
const first = sideOf("AN-1, pass 1", valve.passes[0]!.file);
const second = sideOf("AN-2, pass 1", valve.passes[1]!.file);

const specimen = {
  id: "s1",
  name: "HB-07",
  display: { low: 10, high: 90 },
  polarity: "bright",
  landmarks: {},
  volume: { ...plainGrid([300, 200, 300], [0.1, 0.1, 0.1]), range: { min: 0, max: 100 } },
} as unknown as SpecimenRecord;

const known = new Map<string, Comparison>();
/** Each comparison is made once for all tests. */
function compared(a: Side, b: Side, options: CompareOptions): Comparison {
  const key = JSON.stringify([a.label, b.label, options]);
  const comparison = known.get(key) ?? compareSets(a.plain, b.plain, options, () => 60_000);
  known.set(key, comparison);
  return comparison;
}

const open: SideBySideModel[] = [];
afterEach(() => {
  for (const model of open.splice(0)) model.dispose();
});

function newModel(a: Side, b: Side) {
  const workers: FakeWorker[] = [];
  const model = new SideBySideModel(
    { client: {} } as Services,
    { specimen, passes: [], names: { a: "p1", b: "p2" }, a, b },
    () => {
      const worker = new FakeWorker();
      workers.push(worker);
      return worker;
    },
  );
  open.push(model);
  /** Lets the newest worker do what the page's does. */
  const answer = () => {
    const worker = workers.at(-1)!;
    worker.say({ kind: "compared", comparison: compared(a, b, worker.orders[0]!.options) });
  };
  return { model, workers, answer };
}

/** Total length of strands by side and manner, millimetres. */
function lengths(strands: ReturnType<typeof pairStrands>): Record<string, number> {
  const sums: Record<string, number> = {};
  for (const { side, manner, points } of strands) {
    const line: Vec3[] = [];
    for (let k = 0; k + 2 < points.length; k += 3) line.push([points[k]!, points[k + 1]!, points[k + 2]!]);
    sums[`${side} ${manner}`] = (sums[`${side} ${manner}`] ?? 0) + polylineLength(line);
  }
  return sums;
}

describe("side by side", () => {
  it("compares at once, as the command line does by default, with half the smallest spacing as its step", () => {
    const { workers } = newModel(first, second);
    expect(workers[0]!.orders[0]!.options).toEqual({
      preset: "geometry",
      origin: "held",
      positionScale: 2,
      merge: 0.3,
      tolerance: 0.5,
      minimumDiameter: null,
      step: 0.05,
    });
  });

  it("compares anew when costs, origins or merge are chosen otherwise", () => {
    const { model, workers, answer } = newModel(truth, second);
    answer();
    model.options.value = { preset: "structure", origin: "free", merge: 0.6 };
    expect(workers).toHaveLength(2);
    expect(model.comparison.value).toBeNull();
    answer();
    expect(model.comparison.value!.costs).toEqual({ preset: "structure", origin: "free", positionScale: null, merge: 0.6 });
  });

  // The generator writes down each error it makes, without knowing how the comparison looks for it.
  it("lists the errors that the generator put into a pass, and steps through them in order and around the end", () => {
    const { model, answer } = newModel(truth, second);
    answer();
    const put = valve.errors.filter((error) => error.annotator === "AN-2").map((error) => error.event as string);
    const events = model.groups.value.filter((group) => group.of === "pair").flatMap((group) => group.differences);
    expect(events.map((one) => one.kind as string).sort()).toEqual([...put].sort());
    model.section.showAll();
    const all = model.differences.value;
    for (let k = 0; k <= all.length; k++) {
      model.step(1);
      const here = all[k % all.length]!;
      expect(model.current.value).toBe(here);
      // Places are kept to a millionth of a millimetre.
      const { centre } = model.section.plane.value!;
      expect(Math.hypot(...centre.map((value, axis) => value - here.at[axis]!))).toBeLessThan(1e-5);
      expect(model.lookedAt.value).toEqual(centre);
      expect(model.places.value.filter((place) => place.picked)).toHaveLength(1);
    }
    model.step(-1);
    expect(model.current.value).toBe(all.at(-1));
  });

  it("shows the strand concerned on the side that has it, and the nearest one of the other side", () => {
    const { model, answer } = newModel(first, truth);
    answer();
    const extra = model.differences.value.find((one) => one.kind === "extra-branch")!;
    model.goTo(extra);
    expect(model.stripSide.value).toBe("b");
    expect(model.concerned.value).toMatchObject({ nearest: false, line: { id: extra.b } });
    expect(model.strands.value.filter((strand) => strand.picked).every((strand) => strand.side === "b")).toBe(true);
    expect(model.lineFacts.value!.title).toMatch(/^B /);
    model.otherSide();
    expect(model.concerned.value!.nearest).toBe(true);
    expect(model.lineFacts.value!.title).toMatch(/^A .*, the nearest$/);
  });

  it("keeps the place in the list over another comparison as long as the difference is there", () => {
    const { model, answer } = newModel(truth, second);
    answer();
    model.step(1);
    const { key } = model.current.value!;
    model.options.value = { ...model.options.value, origin: "free" };
    expect(model.current.value).toBeNull();
    answer();
    expect(model.current.value?.key).toBe(key);
  });

  it("goes to the difference that was clicked, and nowhere from far off", () => {
    const { model, answer } = newModel(truth, second);
    answer();
    const target = model.differences.value.at(-1)!;
    const [x, y, z] = target.at;
    expect(model.goNear(pointMm(x + 0.2, y, z))).toBe(true);
    expect(model.current.value).toBe(target);
    expect(model.goNear(pointMm(x + 500, y, z))).toBe(false);
  });
});

describe("the picture of two sets", () => {
  it("is quiet everywhere between a set and itself, and loses no length", () => {
    const { model, answer } = newModel(first, first);
    const before = lengths(pairStrands(first, first, null, TOLERANCE_MM));
    answer();
    const after = lengths(pairStrands(first, first, model.comparison.value, TOLERANCE_MM));
    expect(Object.keys(after).sort()).toEqual(["a quiet", "b quiet"]);
    expect(after["a quiet"]).toBeCloseTo(before["a quiet"]!, 6);
  });

  it("is loud where only one side has string, for about the length of what is missing", () => {
    const { model, answer } = newModel(truth, second);
    answer();
    const { "a loud": loud } = lengths(model.strands.value as ReturnType<typeof pairStrands>);
    const missed = model.differences.value
      .filter((one) => ["missed-branch", "short-end", "exchanged-tails", "link-only-a", "joined-differently"].includes(one.kind))
      .reduce((sum, one) => sum + one.length, 0);
    expect(missed).toBeGreaterThan(1);
    // An exchange shows in both trees, its event measures one of them.
    expect(loud).toBeGreaterThan(0.7 * missed);
    expect(loud).toBeLessThan(2.5 * missed);
  });
});
