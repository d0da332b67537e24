import { batch, computed, effect, type ReadonlySignal, type Signal, signal } from "@preact/signals";
import { NO_SELECTION, type Selection, selectLine, selectNode, stillThere } from "#renderer/editor/selection.ts";
import { EditQueue } from "#renderer/editor/session/edit-queue.ts";
import type { Intent, LeavePlace, StrandPlace } from "#renderer/editor/session/intent.ts";
import type { PassKeeper } from "#renderer/editor/session/pass-keeper.ts";
import { performIntent } from "#renderer/editor/session/perform.ts";
import { Playback } from "#renderer/editor/session/playback.ts";
import { type Stage, settlePlace } from "#renderer/editor/session/stage.ts";
import { afterLabelling, type Sticky, stickyOf } from "#renderer/editor/session/sticky-labels.ts";
import { type AskSolve, StrandSolver } from "#renderer/editor/session/strand-solver.ts";
import { Aiming, sightOf } from "#renderer/editor/tracing/aiming.ts";
import type { FollowSource } from "#renderer/editor/tracing/follower.ts";
import type { ForkProposal } from "#renderer/editor/tracing/guide-advice.ts";
import { type Guide, GuideFollower, type GuideSource } from "#renderer/editor/tracing/guide-follower.ts";
import type { IntentPlace } from "#renderer/editor/tracing/intent-place.ts";
import { type Projection, project, tipOf } from "#renderer/editor/tracing/projection.ts";
import { Proposing } from "#renderer/editor/tracing/proposing.ts";
import { type AskSnap, type Snapped, Snapper } from "#renderer/editor/tracing/snapper.ts";
import { StringsBeside } from "#renderer/editor/tracing/strings-beside.ts";
import { isUnfinished, NOTHING, type UnderWay } from "#renderer/editor/tracing/under-way.ts";
import type { Pointing, Under } from "#renderer/editor/view-control.ts";
import { type PointMm, roundPoint } from "#shared/geometry/types.ts";
import type { PlaceOnProposal } from "#shared/tracing/follow/part-of-proposal.ts";
import { otherEnd, strandsAt } from "#shared/trees/adjacency.ts";
import type { EndKind, NodeId, TreeDocument } from "#shared/trees/document.ts";
import type { LineId } from "#shared/trees/edits/edit-plan.ts";
import type { NodeLabels } from "#shared/trees/edits/node-labels.ts";

/** What the editor needs of the rest of the program; fakes stand in for it in tests. */
export interface EditorPlaces {
  readonly keeper: PassKeeper;
  readonly solve: AskSolve;
  readonly snap: AskSnap;
  readonly guide: GuideSource;
  readonly follow: FollowSource;
  /** Resolves when the server may be asked again. */
  readonly serverBack: () => Promise<void>;
  /** An edit that could not be made; the person is told. */
  readonly failed: (error: unknown) => void;
  /** Keeps what waits over a reload. */
  readonly keepWaiting: (left: LeftWaiting) => void;
  /** What an earlier load of the page left waiting. */
  readonly leftWaiting: LeftWaiting;
}

/** Intents that wait, and what was under way when the first of them was to be carried out. */
export interface LeftWaiting {
  readonly underWay: UnderWay;
  readonly waiting: readonly Intent[];
}

/** A node or pin that is being carried by keys: the next click puts it down. */
export type Carried =
  | { readonly kind: "node"; readonly id: NodeId }
  | { readonly kind: "pin"; readonly line: LineId; readonly index: number };

/** A bright place of the space view is a voxel of a coarse level: the string lies this near, millimetres. */
const BRIGHT_REACH_MM = 0.8;

/** One pass being edited: what is under way, what waits, what is shown. It knows no screen and no server. */
export class Editor {
  readonly document: ReadonlySignal<TreeDocument>;
  readonly selection: Signal<Selection> = signal(NO_SELECTION);
  readonly sticky: Signal<Sticky>;
  readonly carried: Signal<Carried | null> = signal(null);
  readonly beside: StringsBeside;
  readonly projection: ReadonlySignal<Projection>;
  readonly keeper: PassKeeper;
  /** Counts changes of the history, for what is read from the keeper directly. */
  readonly revision = signal(0);
  /** A finished pass is looked at; nothing in it changes until it is under way again. */
  readonly isFinished = signal(false);
  readonly playback = new Playback();
  readonly proposing: Proposing;
  /** What was selected when the playback began. */
  private selectedBefore: Selection | null = null;
  private readonly documentSignal: Signal<TreeDocument>;
  private readonly underWaySignal: Signal<UnderWay> = signal<UnderWay>(NOTHING);
  private readonly queue: EditQueue;
  private readonly guideFollower: GuideFollower;
  private readonly snapper: Snapper;
  private readonly stage: Stage;
  private readonly disposers: (() => void)[] = [];
  private readonly aiming: Aiming;

  constructor(places: EditorPlaces) {
    const { keeper } = places;
    this.keeper = keeper;
    this.documentSignal = signal(keeper.document);
    this.document = this.documentSignal;
    this.sticky = signal(stickyOf(keeper.document));
    this.guideFollower = new GuideFollower(places.guide, (from) => this.beside.closedFor(from));
    this.beside = new StringsBeside(this.documentSignal, this.underWaySignal, this.guideFollower.guide);
    this.snapper = new Snapper(places.snap);
    this.aiming = new Aiming(this.documentSignal, this.snapper);
    this.proposing = new Proposing({
      source: places.follow,
      document: () => this.documentSignal.peek(),
      take: (intent) => this.do(intent),
      failed: places.failed,
    });
    const underWay = this.underWaySignal;
    this.stage = {
      keeper,
      solver: new StrandSolver(places.solve),
      snap: places.snap,
      sticky: () => this.sticky.value,
      get underWay() {
        return underWay.value;
      },
      set underWay(value) {
        underWay.value = value;
      },
    };
    this.queue = new EditQueue({
      perform: (intent, stop) => performIntent(this.stage, intent, stop),
      failed: (_, error) => places.failed(error),
      serverBack: places.serverBack,
      keep: (waiting) => places.keepWaiting({ underWay: underWay.value, waiting }),
    });
    this.projection = computed(() =>
      this.playback.shown.value === null
        ? project(
            this.documentSignal.value,
            this.underWaySignal.value,
            this.queue.waiting.value.map((queued) => queued.intent),
          )
        : project(this.documentSignal.value, NOTHING, []),
    );
    this.disposers.push(
      keeper.onChange(() => this.historyChanged()),
      this.playback.shown.subscribe((played) => {
        if (played !== null) this.showDocument(played.document);
      }),
      effect(() => {
        const { leg, kind } = this.projection.value;
        const tip = tipOf(this.projection.value);
        this.guideFollower.start(kind === "nothing" ? null : tip, leg);
      }),
    );
    if (places.leftWaiting.waiting.length > 0) underWay.value = places.leftWaiting.underWay;
    for (const intent of places.leftWaiting.waiting) this.queue.add(intent);
  }

  get underWay(): ReadonlySignal<UnderWay> {
    return this.underWaySignal;
  }
  get waiting(): EditQueue["waiting"] {
    return this.queue.waiting;
  }
  get serverAway(): ReadonlySignal<boolean> {
    return this.queue.serverAway;
  }
  get guide(): ReadonlySignal<Guide | null> {
    return this.guideFollower.guide;
  }
  get snapped(): ReadonlySignal<Snapped | null> {
    return this.snapper.snapped;
  }
  get readOnly(): boolean {
    return this.keeper.readOnly || this.isFinished.value || this.playback.shown.value !== null;
  }
  /** Edits that wait come first: they would change the history while it is played. */
  get canPlayBack(): boolean {
    return this.keeper.edits > 0 && !this.hasWaiting;
  }

  /** Asks for an edit. It is carried out in its turn; nothing is lost while the server is slow or away. */
  do(intent: Intent): void {
    if (!this.readOnly) this.queue.add(intent);
  }

  settled(): Promise<void> {
    return this.queue.settled();
  }

  /** The pointer or keyboard cursor is here; null = it left the section. */
  async point(pointing: Pointing | null): Promise<void> {
    this.aiming.look(pointing);
    if (pointing === null) {
      this.snapper.leave();
      await this.guideFollower.point(null);
      return;
    }
    const snapped = await this.snapper.aimAt(this.aiming.aim(pointing, this.isGuided));
    if (snapped === null || this.aiming.pointing === null) return;
    // A hand that never rests would see no guide if only its last place counted; but one place passed by is enough at a time.
    const hasGoneOn = this.aiming.pointing !== pointing;
    if (!(hasGoneOn && this.guideFollower.isAsking)) await this.guideFollower.point(snapped.point);
  }

  /** A click, or the key for one: puts down what is carried, sets a pin, goes on with an open end, selects, or starts a tree. */
  click(pointing: Pointing): void {
    const carried = this.carried.value;
    if (carried !== null) {
      this.putDown(carried, pointing);
      return;
    }
    const proposed = this.proposedAt(pointing);
    if (proposed !== null) {
      this.proposing.toggle(proposed.strand);
      return;
    }
    if (this.projection.value.kind === "nothing" && pointing.under !== null) {
      this.select(pointing.under);
      return;
    }
    const at = this.placeOf(pointing);
    this.pinDetour(at);
    this.do({ do: "pin", at });
  }

  /** Closes traced strings to the guide, or opens them again. */
  toggleClosed(): void {
    this.beside.isClosed.value = !this.beside.isClosed.value;
    this.guideFollower.setOutAnew();
  }

  /** The fork that the guide suggests, when it can be taken at once. */
  proposedFork(): ForkProposal | null {
    return this.readOnly || this.hasWaiting ? null : this.beside.fork.value;
  }

  /** Takes the fork that the guide suggests: the branch starts there, or the end under way is joined there. */
  takeProposedFork(): void {
    const fork = this.proposedFork();
    if (fork === null) return;
    const place = { strand: fork.strand, near: fork.at };
    if (fork.kind === "join") {
      this.do({ do: "join", end: fork.end, to: place, givesUpOrigin: true });
      return;
    }
    const underWay = this.underWaySignal.value;
    const isLoneOrigin = underWay.kind === "strand" && strandsAt(this.documentSignal.value, underWay.tip).length === 0;
    // An origin set on a string by mistake goes with its tree; what is under way from a fork is only left.
    this.do({ do: isLoneOrigin ? "back" : "leave" });
    this.do({ do: "branch", from: place });
  }

  /** The proposed strand under the pointer and the place on it; what is drawn already goes before. */
  proposedAt(pointing: Pointing | null = this.aiming.pointing): PlaceOnProposal | null {
    if (pointing === null || pointing.under !== null || this.projection.value.kind !== "nothing") return null;
    return this.proposing.placeSeen(sightOf(pointing));
  }

  /** Proposes the whole string that the pointer is on; from Space or a list, the string at a place given. */
  async propose(at: PointMm | null = null): Promise<void> {
    const { pointing } = this.aiming;
    if (this.readOnly || (at === null && pointing === null)) return;
    // What was snapped last may belong to where the pointer was before.
    await this.proposing.start(at ?? (await settlePlace(this.stage, this.placeOf(pointing!))));
  }

  /** Proposes the string nearest to a bright place of the space view; nothing while something is drawn or proposed. */
  async proposeNear(bright: PointMm): Promise<void> {
    if (this.readOnly || this.projection.value.kind !== "nothing" || this.proposing.following.value.kind !== "none") return;
    const answer = await this.stage.snap({
      at: bright,
      normal: [0, 0, 1],
      slabMm: 2 * BRIGHT_REACH_MM,
      reachMm: BRIGHT_REACH_MM,
      snap: true,
      candidate: 0,
    });
    await this.propose(answer?.candidates[0]?.point ?? bright);
  }

  /** Ends the strand under way: at the pointer, or at its last pin when the pointer is on that pin or off the section. */
  end(kind: EndKind): void {
    this.do({ do: "end", kind, at: this.endPlace() });
  }

  /** True when an end key would end at the last pin rather than at the pointer. */
  endsAtPin(): boolean {
    const tip = tipOf(this.projection.value);
    return tip === null || this.aiming.isAtPin(tip);
  }

  /** Where a branch, join or link would be attached: what the pointer is on or near to, else the selected node. */
  leavePlace(): LeavePlace | null {
    const aimed = this.aiming.attachTo(this.hasWaiting);
    const { node } = this.selection.value;
    return aimed ?? (node === undefined ? null : { node });
  }

  /** The strand under the pointer and the place on it; null when the pointer is on none. */
  strandPlace(): StrandPlace | null {
    return this.aiming.strandPlace(this.hasWaiting);
  }

  /** Plays the current path back from an edit on (null = the first). Nothing is written and nothing can be edited meanwhile. */
  playBack(seq: number | null, isRunning: boolean): void {
    if (!this.canPlayBack) return;
    this.selectedBefore ??= this.selection.value;
    this.carried.value = null;
    this.playback.start(this.keeper, seq, isRunning);
  }

  /** Ends the playback: everything is as it was before. */
  stopPlayback(): void {
    const selected = this.selectedBefore;
    if (this.playback.shown.value === null || selected === null) return;
    this.selectedBefore = null;
    batch(() => {
      this.playback.stop();
      this.documentSignal.value = this.keeper.document;
      this.selection.value = stillThere(this.keeper.document, selected);
    });
  }

  /** Takes the next candidate along the line of sight. */
  nextCandidate(): void {
    if (this.aiming.next()) void this.point(this.aiming.pointing);
  }

  /** Takes hold of a pin of the strand under way, by its place in the projection; nothing while it still waits. */
  carryPinUnderWay(index: number): void {
    const underWay = this.underWaySignal.value;
    const { pins, settled } = this.projection.value;
    if (underWay.kind !== "strand" || settled < pins.length) return;
    const document = this.documentSignal.value;
    const strand = strandsAt(document, underWay.tip)[0];
    if (index === pins.length - 1 || strand === undefined) {
      this.carried.value = { kind: "node", id: underWay.tip };
    } else if (index === 0) {
      this.carried.value = { kind: "node", id: otherEnd(strand, underWay.tip) };
    } else {
      // Pins count from `from`; the projection counts towards the tip.
      const pin = strand.to === underWay.tip ? index - 1 : strand.via.length - index;
      this.carried.value = { kind: "pin", line: strand.id, index: pin };
    }
  }

  undo(): void {
    if (this.readOnly) return;
    const newest = this.queue.waiting.value.at(-1)?.intent.do;
    const movesHistory = newest === "undo" || newest === "redo" || newest === "jump";
    if (newest !== undefined && !movesHistory) this.queue.takeBack();
    else this.do({ do: "undo" });
  }

  redo(): void {
    this.do({ do: "redo" });
  }

  select(under: Under): void {
    const document = this.documentSignal.value;
    if (under.kind === "node") {
      this.selection.value = selectNode(document, under.id);
      if (isUnfinished(document, under.id)) this.do({ do: "resume", node: under.id });
    } else {
      this.selection.value = selectLine(document, under.kind === "strand" ? under.id : under.strand);
    }
  }

  /** Sets labels on nodes and remembers them for the next strings. */
  labelNodes(nodes: readonly NodeId[], labels: NodeLabels, downwards = false): void {
    this.sticky.value = afterLabelling(this.sticky.value, labels);
    this.do({ do: "label", args: { nodes, node: labels, downwards } });
  }

  dispose(): void {
    this.playback.stop();
    this.proposing.putAway();
    for (const dispose of this.disposers) dispose();
    this.guideFollower.stop();
  }

  private putDown(carried: Carried, pointing: Pointing): void {
    const place = this.placeOf(pointing);
    const to = roundPoint("point" in place ? place.point : place.aim.at);
    this.carried.value = null;
    if (carried.kind === "node") this.do({ do: "move-node", args: { node: carried.id, to } });
    else this.do({ do: "move-pin", args: { line: carried.line, index: carried.index, to } });
  }

  private endPlace(): IntentPlace | null {
    if (this.endsAtPin()) return null;
    const at = this.placeOf(this.aiming.pointing!);
    this.pinDetour(at);
    return at;
  }

  /** Pins the way around closed strings, so that the committed curve takes it too. */
  private pinDetour(at: IntentPlace): void {
    const { kind, leg } = this.projection.value;
    if (leg !== "guide" || (kind !== "strand" && kind !== "branch")) return;
    const to = "point" in at ? at.point : at.aim.at;
    for (const point of this.beside.detour(this.guideFollower.guide.value, to)) this.do({ do: "pin", at: { point } });
  }

  private placeOf(pointing: Pointing): IntentPlace {
    return this.aiming.placeOf(pointing, this.isGuided);
  }

  /** The next stretch follows the image, so the pointer snaps to it. */
  private get isGuided(): boolean {
    return this.projection.value.leg === "guide";
  }

  private get hasWaiting(): boolean {
    return this.queue.waiting.value.length > 0;
  }

  private historyChanged(): void {
    batch(() => {
      this.revision.value += 1;
      // What another window writes meanwhile is shown when the playback ends.
      if (this.playback.shown.value === null) this.showDocument(this.keeper.document);
    });
  }

  private showDocument(document: TreeDocument): void {
    batch(() => {
      this.documentSignal.value = document;
      this.selection.value = stillThere(document, this.selection.peek());
    });
  }
}
