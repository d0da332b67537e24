import { batch, computed, effect, type ReadonlySignal, type Signal, signal } from "@preact/signals";
import type { Services } from "#renderer/app/services.ts";
import { type LineFacts, lineFacts } from "#renderer/desk/model/line-facts.ts";
import { type FollowedLine, SectionModel } from "#renderer/desk/model/section-model.ts";
import { CompareRun, type CompareWorker } from "#renderer/study/side-by-side/compare-run.ts";
import { type ConcernedLine, concernedLine } from "#renderer/study/side-by-side/concerned-line.ts";
import { markedPlaces, pairStrands, SIDE_MARKS, type SideStrand, withPicked } from "#renderer/study/side-by-side/pair-scene.ts";
import type { OpenSides, Side, SideName } from "#renderer/study/side-by-side/sides.ts";
import type { PassSummary, SpecimenRecord } from "#shared/api/specimen.ts";
import type { CompareOptions, Comparison } from "#shared/compare/comparison.ts";
import type { CostPreset } from "#shared/compare/costs.ts";
import { type Difference, type DifferenceGroup, differenceGroups } from "#shared/compare/differences.ts";
import type { OriginRule } from "#shared/compare/edit-distance/edit-distance.ts";
import { type PointMm, pointMm } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { MarkedPlace } from "#shared/marks/marked-place.ts";
import type { CrossLinkId, StrandId } from "#shared/trees/document.ts";
import { polylineOf } from "#shared/trees/geometry.ts";

/** What a person chooses of a comparison. */
export interface ChosenOptions {
  readonly preset: CostPreset;
  readonly origin: OriginRule;
  /** Millimetres. */
  readonly merge: number;
}

export type SheetName = "keys" | "export" | "sides";

/** Merge tolerances on offer, millimetres: none, half, the usual one, twice. */
export const MERGES_MM: readonly number[] = [0, 0.15, 0.3, 0.6];
/** Lines and places agree within this, millimetres. */
export const TOLERANCE_MM = 0.5;
const POSITION_SCALE_MM = 2;
const BUDGET_MS = 30_000;
/** A difference is looked at from this near at least. */
const NEAR_MM_PER_PX = 0.025;
/** So much of the valve fills space around a difference, millimetres. */
export const LOOK_ACROSS_MM = 22;
/** A click this near to a difference goes to it, millimetres. */
const REACH_MM = 1.5;

/** Everything the screen holds while two sets are compared: both sides, the comparison, where one stands in its list. */
export class SideBySideModel {
  readonly services: Services;
  readonly specimen: Signal<SpecimenRecord>;
  readonly passes: readonly PassSummary[];
  /** What the place calls the two sides. */
  readonly names: OpenSides["names"];
  readonly a: Side;
  readonly b: Side;
  readonly section: SectionModel;
  readonly stripHint = "Step to a difference to see its strand laid straight, leaflet at the top.";
  readonly run: CompareRun;
  readonly options: Signal<ChosenOptions> = signal<ChosenOptions>({ preset: "geometry", origin: "held", merge: 0.3 });
  readonly sheet: Signal<SheetName | null> = signal<SheetName | null>(null);
  readonly comparison: ReadonlySignal<Comparison | null>;
  readonly groups: ReadonlySignal<readonly DifferenceGroup[]>;
  readonly differences: ReadonlySignal<readonly Difference[]>;
  readonly current: ReadonlySignal<Difference | null>;
  readonly stripSide: Signal<SideName> = signal<SideName>("a");
  readonly concerned: ReadonlySignal<ConcernedLine | null>;
  readonly lineFacts: ReadonlySignal<LineFacts | null>;
  readonly strands: ReadonlySignal<readonly SideStrand[]>;
  readonly places: ReadonlySignal<readonly MarkedPlace[]>;
  /** The place that space turns to; set by stepping. */
  readonly lookedAt: Signal<PointMm | null> = signal<PointMm | null>(null);
  private readonly key: Signal<string | null> = signal<string | null>(null);
  private readonly stop: () => void;

  constructor(services: Services, sides: OpenSides, makeWorker: () => CompareWorker) {
    this.services = services;
    this.specimen = signal(sides.specimen);
    this.passes = sides.passes;
    this.names = sides.names;
    this.a = sides.a;
    this.b = sides.b;
    this.run = new CompareRun(makeWorker);
    this.section = new SectionModel({
      client: services.client,
      specimen: this.specimen,
      followed: () => this.followed(),
    });
    this.comparison = computed(() => {
      const state = this.run.state.value;
      return state.kind === "done" ? state.comparison : null;
    });
    this.groups = computed(() => {
      const comparison = this.comparison.value;
      return comparison === null ? [] : differenceGroups(comparison, this.a.plain, this.b.plain);
    });
    this.differences = computed(() => this.groups.value.flatMap((group) => group.differences));
    this.current = computed(() => this.differences.value.find((one) => one.key === this.key.value) ?? null);
    this.concerned = computed(() => {
      const difference = this.current.value;
      const side = this.stripSide.value;
      return difference === null ? null : concernedLine(this[side].document, difference, side);
    });
    this.lineFacts = computed(() => this.factsOfConcerned());
    const unpicked = computed(() => pairStrands(this.a, this.b, this.comparison.value, TOLERANCE_MM));
    this.strands = computed(() => withPicked(unpicked.value, this.stripSide.value, this.concerned.value?.line.id ?? null));
    this.places = computed(() => markedPlaces(this.differences.value, this.current.value, this.b.document));
    this.stop = effect(() => {
      this.compare(this.options.value);
    });
  }

  /** The options of the comparison that is shown, as the command line has them. */
  compareOptions(): CompareOptions {
    const { spacing } = this.specimen.value.volume;
    return {
      ...this.options.value,
      positionScale: POSITION_SCALE_MM,
      tolerance: TOLERANCE_MM,
      minimumDiameter: null,
      step: Math.min(...spacing) / 2,
    };
  }

  again(): void {
    this.compare(this.options.peek());
  }

  /** The next (+1) or previous (-1) difference, around the end. */
  step(by: 1 | -1): void {
    const all = this.differences.value;
    if (all.length === 0) return;
    const at = all.findIndex((one) => one.key === this.key.value);
    const next = at < 0 ? (by === 1 ? 0 : all.length - 1) : (at + by + all.length) % all.length;
    this.goTo(all[next]!);
  }

  /** Shows a difference: section and space on its place, the strip on the side that has it. */
  goTo(difference: Difference): void {
    const [x, y, z] = difference.at;
    const at = pointMm(x, y, z);
    batch(() => {
      this.key.value = difference.key;
      this.stripSide.value = difference.a === null && difference.b !== null ? "b" : "a";
      this.lookedAt.value = at;
      this.section.pointing.value = null;
      const plane = this.section.plane.value;
      if (plane !== null && plane.mmPerPx > NEAR_MM_PER_PX) {
        this.section.plane.value = { ...plane, mmPerPx: NEAR_MM_PER_PX };
      }
      this.section.goTo(at);
    });
  }

  /** Goes to the difference at a place that was clicked, if there is one. @returns whether there was */
  goNear(at: PointMm): boolean {
    const near = this.differences.value
      .map((difference) => ({ difference, off: distance(difference.at, at) }))
      .filter(({ off }) => off <= REACH_MM)
      .sort((p, q) => p.off - q.off)[0];
    if (near !== undefined) this.goTo(near.difference);
    return near !== undefined;
  }

  otherSide(): void {
    this.stripSide.value = this.stripSide.value === "a" ? "b" : "a";
  }

  followed(): FollowedLine | null {
    const concerned = this.concerned.value;
    if (concerned === null) return null;
    return { points: polylineOf(this[this.stripSide.value].document, concerned.line), doubtful: [] };
  }

  dispose(): void {
    this.stop();
    this.run.dispose();
    this.section.detach();
  }

  private compare(options: ChosenOptions): void {
    const whole = { ...this.compareOptions(), ...options };
    this.run.start({ a: this.a.plain, b: this.b.plain, options: whole, budgetMs: BUDGET_MS });
  }

  private factsOfConcerned(): LineFacts | null {
    const side = this.stripSide.value;
    const concerned = this.concerned.value;
    if (concerned === null) return null;
    const facts = lineFacts(this[side].document, { strand: concerned.line.id as StrandId | CrossLinkId });
    if (facts === null) return null;
    const title = `${side.toUpperCase()} ${facts.title}${concerned.nearest ? ", the nearest" : ""}`;
    // Ids count anew in each pass, so that a picture is known by its side as well.
    return { ...facts, title, curve: `${side} ${concerned.line.id}`, colour: SIDE_MARKS[side].colour };
  }
}
