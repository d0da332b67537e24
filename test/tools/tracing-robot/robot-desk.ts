// The desk as the robot has it: the page's own editor over the engine's own kernels, with a hand that shakes. The robot moves a
// pointer over a section, clicks, presses keys and turns the wheel; each is counted.
import { signal } from "@preact/signals";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import { TRACE_COMMANDS } from "#renderer/editor/commands/trace-commands.ts";
import { Editor, type EditorPlaces } from "#renderer/editor/editor.ts";
import { NOTHING } from "#renderer/editor/tracing/under-way.ts";
import type { Pointing } from "#renderer/editor/view-control.ts";
import { fixedAxes, planeStepMm } from "#renderer/section/planes.ts";
import { awayFrom, type PlaneAxes } from "#renderer/section/view-plane.ts";
import type { SolvedCurve } from "#shared/api/engine.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { add, dot, scale, subtract } from "#shared/geometry/vec3.ts";
import type { SeededRandom } from "#shared/random/seeded-random.ts";
import { followWhole } from "#shared/tracing/follow/follow-string.ts";
import type { FollowProposal } from "#shared/tracing/follow/proposal.ts";
import { type GuideFronts, openGuideFronts } from "#shared/tracing/guide/guide-fronts.ts";
import { previewGuide } from "#shared/tracing/guide/guide-preview.ts";
import { snap } from "#shared/tracing/guide/snap.ts";
import { solveStrand } from "#shared/tracing/solve-strand.ts";
import type { TraceParameters } from "#shared/tracing/strand-request.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";
import { MemoryKeeper } from "#test/renderer/editor/fake-places.ts";
import { type Effort, SHAKE_PX } from "#test/tools/tracing-robot/effort.ts";

/** A voxel is shown so large. The demo valve's are when the whole valve is in the pane. */
const PX_PER_VOXEL = 2.5;
/** As the desk begins. */
const SLAB_MM = 0.4;
const GUIDE_BYTES = 256 * 2 ** 20;

export type FixedPlane = "flat" | "front" | "side";

/** A desk over one scan. */
export class RobotDesk {
  readonly editor: Editor;
  readonly effort: Effort = { clicks: 0, keys: 0, wheelSteps: 0 };
  readonly failures: unknown[] = [];
  readonly voxelMm: number;
  private readonly pointing = signal<Pointing | null>(null);
  private axes: PlaneAxes;
  /** The key that releases the snap was held at the place before. */
  private isHeld = false;
  /** Depth of the plane along its normal, millimetres. */
  private depth: number;

  constructor(
    private readonly pyramid: VoxelPyramid,
    parameters: TraceParameters,
    private readonly random: SeededRandom,
  ) {
    const { grid } = pyramid;
    this.voxelMm = Math.min(...grid.spacing);
    this.axes = fixedAxes("flat", grid.direction, null);
    this.depth = this.middleDepth();
    this.editor = new Editor(placesOf(pyramid, parameters, this.failures));
  }

  /** Another plane, by its key. */
  showPlane(plane: FixedPlane): void {
    this.axes = fixedAxes(plane, this.pyramid.grid.direction, null);
    this.depth = this.middleDepth();
    this.effort.keys++;
  }

  /** Turns the wheel until a place lies in the slab, and moves the pointer to it, as well as the hand can. */
  async pointAt(place: Vec3): Promise<void> {
    const normal = awayFrom(this.axes);
    const away = dot(place, normal) - this.depth;
    const stepMm = planeStepMm(this.axes, this.pyramid.grid);
    const steps = Math.ceil(Math.max(0, Math.abs(away) - SLAB_MM / 2) / stepMm - 1e-9);
    this.effort.wheelSteps += steps;
    this.depth += Math.sign(away) * steps * stepMm;
    const mmPerPx = this.voxelMm / PX_PER_VOXEL;
    const onPlane = subtract(place, scale(normal, dot(place, normal) - this.depth));
    const shaken = add(
      add(onPlane, scale(this.axes.right, this.random.normal() * SHAKE_PX * mmPerPx)),
      scale(this.axes.down, this.random.normal() * SHAKE_PX * mmPerPx),
    );
    const at = pointMm(shaken[0], shaken[1], shaken[2]);
    this.pointing.value = { at, normal, mmPerPx, slabMm: SLAB_MM, under: null, released: false };
    await this.editor.point(this.pointing.value);
  }

  async click(): Promise<void> {
    this.effort.clicks++;
    this.isHeld = false;
    this.editor.click(this.pointing.value!);
    await this.editor.settled();
  }

  /** A key of the desk's own command table; false when it does nothing now. */
  async key(key: string): Promise<boolean> {
    this.effort.keys++;
    if (key === "Ctrl+Z") this.editor.undo();
    else {
      const command = TRACE_COMMANDS.find(({ keys }) => keys.includes(key));
      if (command === undefined) throw new Error(`no command has the key ${key}`);
      const context = { editor: this.editor, view: { pointing: this.pointing } } as unknown as DeskContext;
      if (!command.enabled(context)) return false;
      await command.perform(context);
    }
    await this.editor.settled();
    return true;
  }

  /** Next string in depth; settles when the pointer has been answered. */
  async nextInDepth(): Promise<void> {
    await this.key("D");
    await this.editor.point(this.pointing.value);
  }

  /** Holds the key that releases the snap: the place itself is meant. */
  async release(): Promise<void> {
    // Held from one place to the next it is one press.
    if (!this.isHeld) this.effort.keys++;
    this.isHeld = true;
    this.pointing.value = { ...this.pointing.value!, released: true };
    await this.editor.point(this.pointing.value);
  }

  private middleDepth(): number {
    const { grid } = this.pyramid;
    const middle = grid.size.map((side, axis) => ((side - 1) / 2) * grid.spacing[axis]!);
    const d = grid.direction;
    const place = [0, 1, 2].map(
      (k) => grid.origin[k]! + d[3 * k]! * middle[0]! + d[3 * k + 1]! * middle[1]! + d[3 * k + 2]! * middle[2]!,
    );
    return dot(place as unknown as Vec3, awayFrom(this.axes));
  }
}

/** The engine's kernels as the editor asks for them; every answer is complete before it is given. */
function placesOf(pyramid: VoxelPyramid, parameters: TraceParameters, failures: unknown[]): EditorPlaces {
  const context = createTraceContext(pyramid, parameters.polarity);
  const guides = new Map<string, GuideFronts>();
  let followed: FollowProposal | null = null;
  return {
    keeper: new MemoryKeeper(),
    solve: async (strands) =>
      strands.map((strand): SolvedCurve => {
        const { points, radii, madeBy, imageFit, followed } = solveStrand(pyramid, strand, parameters, undefined, context);
        const known = Array.from(radii, (radius) => (Number.isNaN(radius) ? null : radius));
        return { points: Array.from(points), radii: known, madeBy, imageFit, followed };
      }),
    snap: async (aim) => snap(context, aim),
    guide: {
      open: async (from, impassable) => {
        guides.clear();
        const session = `g${from.join()}`;
        guides.set(session, openGuideFronts(context, from, GUIDE_BYTES, impassable));
        return { session };
      },
      preview: async (session, to) => {
        const guide = guides.get(session);
        return guide === undefined ? null : previewGuide(guide, to, () => false);
      },
      close: async () => undefined,
    },
    follow: {
      open: async (at, traced) => {
        followed = followWhole(pyramid, context, parameters, at, { traced });
        return { session: "f" };
      },
      more: async () => ({ done: true, growing: [], lengthMm: followed?.lengthMm ?? 0, proposal: followed }),
      close: async () => undefined,
    },
    serverBack: async () => undefined,
    failed: (error) => void failures.push(error),
    keepWaiting: () => undefined,
    leftWaiting: { underWay: NOTHING, waiting: [] },
  };
}
