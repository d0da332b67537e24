import { computed, effect, type ReadonlySignal, type Signal, signal } from "@preact/signals";
import type { Services } from "#renderer/app/services.ts";
import { findAssignment } from "#renderer/desk/model/find-assignment.ts";
import { type ShownFinding, shownFindings } from "#renderer/desk/model/findings.ts";
import { type LineFacts, lineFacts, selectedLine } from "#renderer/desk/model/line-facts.ts";
import { OverlookedModel } from "#renderer/desk/model/overlooked-model.ts";
import { overlookedSource } from "#renderer/desk/model/overlooked-source.ts";
import type { PlaceOnStrand } from "#renderer/desk/model/place-on-strip.ts";
import { lookAtRecovered } from "#renderer/desk/model/recovered-edits.ts";
import { type FollowedLine, SectionModel } from "#renderer/desk/model/section-model.ts";
import { serverBack } from "#renderer/desk/model/server-back.ts";
import { keepWaiting, leftWaiting, NOTHING_LEFT } from "#renderer/desk/model/waiting-store.ts";
import { Editor } from "#renderer/editor/editor.ts";
import type { PassKeeper } from "#renderer/editor/session/pass-keeper.ts";
import type { RecoveredEdits, RecoveredLogs } from "#renderer/storage/recovered-logs.ts";
import type { PassSummary, SpecimenRecord } from "#shared/api/specimen.ts";
import type { AssignmentView } from "#shared/api/study.ts";
import { arcLengths } from "#shared/geometry/polyline.ts";
import { type Measures, measureTrees } from "#shared/measure/measure-trees.ts";
import type { TraceParameters } from "#shared/tracing/strand-request.ts";
import { polylineOf } from "#shared/trees/geometry.ts";
import { plainFromDocument } from "#shared/trees/plain-from-document.ts";

export type SheetName =
  | "palette"
  | "keys"
  | "menu"
  | "export"
  | "take-in"
  | "about"
  | "mark"
  | "rename"
  | "dismiss"
  | "upright"
  | "radius"
  | "rules"
  | "open-ends";

/** What the side panel lists. */
export type SideTab = "trees" | "findings" | "overlooked";

export interface DeskFacts {
  readonly services: Services;
  readonly specimen: SpecimenRecord;
  readonly pass: PassSummary;
  readonly keeper: PassKeeper;
  readonly recoveredLogs: RecoveredLogs;
}

/** Checks run when no edit came for this long. */
const CHECK_REST_MS = 300;

/** Everything one open desk holds: the editor, the section, and what of the screen is open. */
export class DeskModel {
  readonly services: Services;
  readonly specimen: Signal<SpecimenRecord>;
  readonly pass: Signal<PassSummary>;
  readonly editor: Editor;
  readonly section: SectionModel;
  readonly sheet: Signal<SheetName | null> = signal(null);
  readonly historyShown = signal(false);
  /** Where the radius sheet sets a radius. */
  readonly radiusPlace: Signal<PlaceOnStrand | null> = signal(null);
  /** What an assignment of a study is drawn by; null for any other pass. */
  readonly assignment: Signal<AssignmentView | null> = signal(null);
  readonly recoveredLogs: RecoveredLogs;
  /** Edits that this browser set aside, as last looked at. */
  readonly recovered: Signal<readonly RecoveredEdits[]> = signal([]);
  readonly tab: Signal<SideTab> = signal<SideTab>("trees");
  /** Follows the document once it rests: checks of a whole valve are too much for every pin. */
  readonly findings: Signal<readonly ShownFinding[]>;
  readonly findingAt: Signal<string | null> = signal(null);
  readonly overlooked: OverlookedModel;
  readonly measures: ReadonlySignal<Measures>;
  /** The selected strand as the strip shows it. */
  readonly lineFacts: ReadonlySignal<LineFacts | null>;

  private readonly stops: (() => void)[];

  constructor(facts: DeskFacts) {
    const { services, specimen, pass, keeper, recoveredLogs } = facts;
    const { client, notices } = services;
    const parameters: TraceParameters = { polarity: specimen.polarity, blurFwhmMm: specimen.volume.blurFwhmMm };
    this.services = services;
    this.specimen = signal(specimen);
    this.pass = signal(pass);
    this.recoveredLogs = recoveredLogs;
    this.editor = new Editor({
      keeper,
      solve: async (strands, stop) => (await client.solve(specimen.id, strands, parameters, stop)).curves,
      snap: ({ at, normal, slabMm, reachMm }) =>
        client.snap({ specimen: specimen.id, at, normal, slabMm, reachMm, polarity: specimen.polarity }),
      guide: {
        open: (from, impassable) => client.openGuide(specimen.id, from, parameters, impassable),
        preview: (session, to) => client.previewGuide(session, to),
        close: (session) => client.closeGuide(session),
      },
      follow: {
        open: (at, traced) => client.openFollow({ specimen: specimen.id, at, parameters, traced }),
        more: (session) => client.moreFollow(session),
        close: (session) => client.closeFollow(session),
      },
      serverBack: () => serverBack(client),
      failed: (error) => notices.failed(error),
      keepWaiting: (left) => keepWaiting(pass.id, left),
      // The window that writes carries them out.
      leftWaiting: keeper.readOnly ? NOTHING_LEFT : leftWaiting(pass.id),
    });
    this.overlooked = new OverlookedModel(overlookedSource(services, specimen, pass.id), this.editor.document);
    this.section = new SectionModel({ client, specimen: this.specimen, followed: () => this.followed() });
    this.measures = computed(() => measureTrees(plainFromDocument(this.editor.document.value)));
    this.lineFacts = computed(() => lineFacts(this.editor.document.value, this.editor.selection.value));
    this.findings = signal(shownFindings(keeper.document));
    this.stops = [
      effect(() => {
        const document = this.editor.document.value;
        const timer = setTimeout(() => {
          this.findings.value = shownFindings(document);
        }, CHECK_REST_MS);
        return () => clearTimeout(timer);
      }),
      effect(() => {
        this.editor.isFinished.value = this.pass.value.state === "finished";
      }),
    ];
    void lookAtRecovered(this);
    void findAssignment(services, specimen.id).then((found) => {
      this.assignment.value = found;
    });
  }

  /** The line that across and along planes follow: the live guide, else the line that the strip shows. */
  followed(): FollowedLine | null {
    const guide = this.editor.guide.value;
    if (guide !== null && guide.points.length > 1) {
      const at = arcLengths(guide.points);
      const doubtful = guide.doubtful.map(([a, b]) => [at[a] ?? 0, at[b] ?? 0] as const);
      return { points: guide.points, doubtful };
    }
    const document = this.editor.document.value;
    // The line that the strip shows, so that a click on the strip goes there.
    const line = selectedLine(document, this.editor.selection.value);
    return line === null ? null : { points: polylineOf(document, line), doubtful: [] };
  }

  dispose(): void {
    for (const stop of this.stops) stop();
    this.overlooked.dispose();
    this.editor.dispose();
    this.section.detach();
    void this.editor.keeper.close();
  }
}
