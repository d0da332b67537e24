import { batch, type Signal, signal } from "@preact/signals";
import type { Client } from "#renderer/client/client.ts";
import type { PlaneName, Pointing, ViewControl } from "#renderer/editor/view-control.ts";
import { acrossAxes, alongAxes, fixedAxes, planeStepMm, steppedBy } from "#renderer/section/planes.ts";
import type { ShownRuler } from "#renderer/section/section-content.ts";
import type { SectionView } from "#renderer/section/section-view.ts";
import { type PlaneAxes, type ViewPlane, ZOOM_LIMITS, zoomed } from "#renderer/section/view-plane.ts";
import type { HistogramAnswer } from "#shared/api/engine.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { arcLengths, nearestOnPolyline, pointAt, polylineLength } from "#shared/geometry/polyline.ts";
import { type PointMm, pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { valveAxes } from "#shared/geometry/valve-axes.ts";
import { add, norm, scale, subtract } from "#shared/geometry/vec3.ts";
import { indexToMm } from "#shared/volume/grid.ts";

/** The line that `across` and `along` planes follow, and where its image fit falls (arc lengths, millimetres). */
export interface FollowedLine {
  readonly points: readonly Vec3[];
  readonly doubtful: readonly (readonly [number, number])[];
}

export interface SectionPlaces {
  readonly client: Client;
  /** Read again at each use: landmarks may come later. */
  readonly specimen: { readonly value: SpecimenRecord };
  readonly followed: () => FollowedLine | null;
}

/** How long the picture must rest before the sharp one is asked for. */
const REST_MS = 90;
/** A tangent is taken over this length of the line to either side, millimetres. */
const TANGENT_MM = 0.3;

/** What the section shows, and the picture for it: the newest plane wins, half resolution while moving. */
export class SectionModel implements ViewControl {
  readonly plane: Signal<ViewPlane | null> = signal(null);
  readonly planeName: Signal<PlaneName> = signal<PlaneName>("flat");
  readonly pointing: Signal<Pointing | null> = signal(null);
  readonly slabMm = signal(0.4);
  readonly slabMode = signal<"max" | "mean">("max");
  readonly outlines = signal(true);
  readonly ruler: Signal<ShownRuler | null> = signal(null);
  readonly rulerShown = signal(false);
  readonly low: Signal<number>;
  readonly high: Signal<number>;
  /** Size of the pane, CSS pixels. */
  readonly paneSize: Signal<{ readonly width: number; readonly height: number }> = signal({ width: 0, height: 0 });
  readonly histogram: Signal<HistogramAnswer | null> = signal(null);
  private view: SectionView | null = null;
  /** True once the pane had a size: before, "all" could not be judged. */
  private sized = false;
  private rest: ReturnType<typeof setTimeout> | null = null;
  constructor(private readonly places: SectionPlaces) {
    this.low = signal(this.specimen.display.low);
    this.high = signal(this.specimen.display.high);
    if (this.specimen.polarity === "dark") this.slabMode.value = "mean";
  }

  private get specimen(): SpecimenRecord {
    return this.places.specimen.value;
  }

  attach(view: SectionView): void {
    this.view = view;
    if (this.plane.value === null) this.showAll();
    else this.changed();
  }

  detach(): void {
    this.view = null;
    if (this.rest !== null) clearTimeout(this.rest);
  }

  async loadHistogram(): Promise<void> {
    this.histogram.value = await this.places.client.histogram(this.specimen.id);
  }

  /** Shows another plane: at once at half resolution, sharp when it rests. */
  setPlane(plane: ViewPlane): void {
    this.plane.value = plane;
    this.changed();
  }

  showPlane(name: PlaneName): void {
    const before = this.plane.value;
    if (before === null) return;
    this.planeName.value = name;
    if (name === "across" || name === "along") this.followLine(before.centre, name);
    else this.setPlane({ ...before, ...this.fixed(name) });
  }

  step(planes: number): void {
    const plane = this.plane.value;
    if (plane === null) return;
    const line = this.planeName.value === "across" ? this.places.followed() : null;
    if (line === null) {
      this.setPlane(steppedBy(plane, planes, this.specimen.volume));
      return;
    }
    const stepMm = planeStepMm(plane, this.specimen.volume);
    this.acrossAt(line, nearestOnPolyline(line.points, plane.centre).at + planes * stepMm, plane);
  }

  zoom(factor: number): void {
    const plane = this.plane.value;
    if (plane !== null) this.setPlane(zoomed(plane, factor, this.pointing.value?.at ?? plane.centre));
  }

  goTo(at: PointMm): void {
    const plane = this.plane.value;
    if (plane === null) return;
    const name = this.planeName.value;
    if (name === "across" || name === "along") this.followLine(at, name);
    else this.setPlane({ ...plane, centre: at });
  }

  showAll(): void {
    const size = this.view?.size;
    const { size: voxels, spacing } = this.specimen.volume;
    const middle = indexToMm(this.specimen.volume, [(voxels[0] - 1) / 2, (voxels[1] - 1) / 2, (voxels[2] - 1) / 2]);
    const sides = [voxels[0] * spacing[0], voxels[1] * spacing[1], voxels[2] * spacing[2]].sort((a, b) => b - a);
    const pane = size === undefined ? 600 : Math.max(1, Math.min(size.width, size.height));
    const mmPerPx = Math.min(ZOOM_LIMITS.coarsest, Math.max(ZOOM_LIMITS.finest, (sides[1]! * 1.04) / pane));
    const name = this.planeName.value;
    const axes = this.plane.value !== null && (name === "across" || name === "along") ? this.plane.value : this.fixed(name);
    this.setPlane({ right: axes.right, down: axes.down, centre: middle, mmPerPx });
  }

  setSlab(mm: number): void {
    this.slabMm.value = mm;
    this.changed();
  }

  setSlabMode(mode: "max" | "mean"): void {
    this.slabMode.value = mode;
    this.changed();
  }

  setWindow(low: number, high: number): void {
    const { min, max } = this.specimen.volume.range;
    const least = Math.max((max - min) / 1000, Number.EPSILON);
    batch(() => {
      this.low.value = low;
      this.high.value = Math.max(high, low + least);
    });
    this.changed();
  }

  autoContrast(): void {
    const found = this.histogram.value;
    if (found !== null) this.setWindow(found.low, found.high);
    else this.setWindow(this.specimen.display.low, this.specimen.display.high);
  }

  changeContrast(factor: number, shift: number): void {
    const width = this.high.value - this.low.value;
    const middle = (this.high.value + this.low.value) / 2 + shift * width;
    this.setWindow(middle - (width * factor) / 2, middle + (width * factor) / 2);
  }

  toggleRuler(): void {
    const plane = this.plane.value;
    this.rulerShown.value = !this.rulerShown.value;
    if (!this.rulerShown.value || plane === null) {
      this.ruler.value = null;
      return;
    }
    const half = (this.view?.size.width ?? 600) * 0.15 * plane.mmPerPx;
    const end = (sign: number) => {
      const p = add(plane.centre, scale(plane.right, sign * half));
      return pointMm(p[0], p[1], p[2]);
    };
    this.ruler.value = { from: end(-1), to: end(1) };
  }

  toggleOutlines(): void {
    this.outlines.value = !this.outlines.value;
  }

  moveCursor(dx: number, dy: number): void {
    this.view?.moveCursor(dx, dy);
  }

  clickAtCursor(): void {
    this.view?.clickAtCursor();
  }

  nextDoubtfulPlace(): void {
    const line = this.places.followed();
    const plane = this.plane.value;
    if (line === null || plane === null || line.doubtful.length === 0) return;
    const here = nearestOnPolyline(line.points, plane.centre).at;
    const next = line.doubtful.find(([from]) => from > here + 1e-6) ?? line.doubtful[0]!;
    this.planeName.value = "across";
    this.acrossAt(line, (next[0] + next[1]) / 2, plane);
  }

  /** Puts the across plane at an arc length of the followed line. */
  acrossAt(line: FollowedLine, atMm: number, before: PlaneAxes & Pick<ViewPlane, "mmPerPx">): void {
    const at = Math.min(Math.max(atMm, 0), polylineLength(line.points));
    const centre = pointAt(line.points, at);
    const axes = acrossAxes(tangentAt(line.points, at), before);
    this.setPlane({ ...axes, mmPerPx: before.mmPerPx, centre: pointMm(centre[0], centre[1], centre[2]) });
  }

  private followLine(near: PointMm, name: "across" | "along"): void {
    const before = this.plane.value!;
    const line = this.places.followed();
    if (line === null || line.points.length < 2) {
      this.setPlane({ ...before, centre: near });
      return;
    }
    const { at } = nearestOnPolyline(line.points, near);
    if (name === "across") {
      this.acrossAt(line, at, before);
      return;
    }
    const centre = pointAt(line.points, at);
    const axes = alongAxes(tangentAt(line.points, at), before);
    this.setPlane({ ...axes, mmPerPx: before.mmPerPx, centre: pointMm(centre[0], centre[1], centre[2]) });
  }

  private fixed(name: PlaneName): PlaneAxes {
    const kind = name === "across" || name === "along" ? "flat" : name;
    return fixedAxes(kind, this.specimen.volume.direction, valveAxes(this.specimen.landmarks));
  }

  /** The pane has another size. */
  resized(size: { readonly width: number; readonly height: number }): void {
    this.paneSize.value = size;
    if (this.plane.value === null || !this.sized) this.showAll();
    else this.changed();
    this.sized = size.width > 0;
  }

  /** Draws what is known now and asks for its picture. */
  changed(): void {
    const { view } = this;
    const plane = this.plane.value;
    if (view === null || plane === null) return;
    view.show({ plane, slabMm: this.slabMm.value });
    void this.ask("moving");
    if (this.rest !== null) clearTimeout(this.rest);
    this.rest = setTimeout(() => void this.ask("still"), REST_MS);
  }

  private async ask(quality: "moving" | "still"): Promise<void> {
    const { view } = this;
    const plane = view?.wantedPlane(quality) ?? null;
    if (view === null || plane === null) return;
    try {
      const image = await this.places.client.section({
        specimen: this.specimen.id,
        plane,
        slabMm: this.slabMm.value,
        slabMode: this.slabMode.value,
        low: this.low.value,
        high: this.high.value,
        quality,
      });
      if (image !== null && this.view === view) view.show({ image, picture: { kind: "ready" } });
    } catch (error) {
      const message = error instanceof Error ? error.message : String(error);
      if (this.view === view) view.show({ picture: { kind: "error", message } });
    }
  }
}

/** Direction of a line at an arc length, over a short stretch to either side; not normalised. */
export function tangentAt(points: readonly Vec3[], at: number): Vec3 {
  const total = arcLengths(points).at(-1) ?? 0;
  const a = pointAt(points, Math.max(0, at - TANGENT_MM));
  const b = pointAt(points, Math.min(total, at + TANGENT_MM));
  const direction = subtract(b, a);
  return norm(direction) > 0 ? direction : subtract(points.at(-1)!, points[0]!);
}
