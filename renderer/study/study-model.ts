import { type ReadonlySignal, type Signal, signal } from "@preact/signals";
import type { Services } from "#renderer/app/services.ts";
import { ProtocolEditing } from "#renderer/study/protocol/protocol-editing.ts";
import type { MethodFiles } from "#renderer/study/report/report-order.ts";
import { pageReportWorker, ReportRun } from "#renderer/study/report/report-run.ts";
import type { AssignmentCell, StudyView } from "#shared/api/study.ts";
import type { ProtocolContent, ProtocolVersion } from "#shared/study/protocol.ts";

/** One open study: what the server says of it, kept up to date by events, and the changes a lead asks for. */
export class StudyModel {
  private readonly viewSignal = signal<StudyView | null>(null);
  private readonly failureSignal = signal<string | null>(null);
  private readonly busySignal = signal(false);
  private protocol: { readonly version: number; readonly editing: ProtocolEditing } | null = null;
  readonly report = new ReportRun(pageReportWorker);
  /** The report was begun once by opening its part. */
  reportOpened = false;
  /** A computed method to be held against the annotators; null = none. */
  readonly method: Signal<MethodFiles | null> = signal<MethodFiles | null>(null);
  private loading = false;
  private again = false;

  constructor(
    readonly services: Services,
    readonly id: string,
  ) {}

  get view(): ReadonlySignal<StudyView | null> {
    return this.viewSignal;
  }
  /** Why the study could not be read; null while it could. */
  get failure(): ReadonlySignal<string | null> {
    return this.failureSignal;
  }
  /** A change is under way. */
  get busy(): ReadonlySignal<boolean> {
    return this.busySignal;
  }

  /** Loads, and follows the events; the returned function stops. */
  start(): () => void {
    void this.load();
    const stop = this.services.client.onEvent((event) => {
      if (event.event === "studies") void this.load();
    });
    return () => {
      stop();
      this.report.dispose();
    };
  }

  /** Reads the study again; a call while one is under way makes one more afterwards. */
  async load(): Promise<void> {
    if (this.loading) {
      this.again = true;
      return;
    }
    this.loading = true;
    try {
      this.viewSignal.value = await this.services.client.studies.one(this.id);
      this.failureSignal.value = null;
    } catch (error) {
      this.failureSignal.value = error instanceof Error ? error.message : String(error);
    } finally {
      this.loading = false;
    }
    if (!this.again) return;
    this.again = false;
    await this.load();
  }

  /** Carries a change out and shows what it made. @returns why it failed; null when it did not */
  async change(act: () => Promise<StudyView>): Promise<string | null> {
    this.busySignal.value = true;
    try {
      this.viewSignal.value = await act();
      return null;
    } catch (error) {
      return error instanceof Error ? error.message : String(error);
    } finally {
      this.busySignal.value = false;
    }
  }

  /** What is being typed of a version of the protocol; the same one as long as that version is the current one. */
  editing({ version, content }: Pick<ProtocolVersion, "version" | "content">): ProtocolEditing {
    if (this.protocol?.version !== version) {
      const save = (typed: ProtocolContent) => this.change(() => this.services.client.studies.changeProtocol(this.id, typed));
      this.protocol = { version, editing: new ProtocolEditing(content, save) };
    }
    return this.protocol.editing;
  }

  /** Keeps a still picture with the study. @returns its hash */
  readonly keepPicture = async (png: Blob): Promise<string> =>
    (await this.services.client.studies.addPicture(this.id, png)).picture;

  readonly readPicture = (sha256: string): Promise<Blob> => this.services.client.studies.picture(this.id, sha256);

  specimenName(id: string): string {
    return this.viewSignal.value?.specimens.find((specimen) => specimen.id === id)?.name ?? "a specimen that is gone";
  }

  /** An assignment as people of the study call it: "HB-07, AN-1, pass 2". */
  nameOf({ specimen, annotator, pass }: Pick<AssignmentCell, "specimen" | "annotator" | "pass">): string {
    return `${this.specimenName(specimen)}, ${annotator}, pass ${pass}`;
  }
}
