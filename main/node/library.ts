import { join } from "node:path";
import type { LibraryPort } from "#main/http/ports.ts";
import { writeFault } from "#main/node/disk-fault.ts";
import type { FilePort } from "#main/node/file-port.ts";
import type { WriterCheck } from "#main/node/journal.ts";
import { type LibraryLayout, libraryLayout, type RandomBytes } from "#main/node/layout.ts";
import { PassClaims } from "#main/node/pass-claims.ts";
import { PassStore } from "#main/node/pass-store.ts";
import { patchedSpecimen, readSpecimenFile } from "#main/node/specimen-file.ts";
import { AssignmentStore } from "#main/node/study/assignment-store.ts";
import { Turns } from "#main/node/turns.ts";
import { UNFINISHED, writeJson } from "#main/node/whole-file.ts";
import type { AppendAnswer, AppendRequest, LogAnswer, ServerEvent, ShelfAnswer, SpecimenPatch } from "#shared/api/routes.ts";
import type { PassState, PassSummary, ShelfSpecimen, SpecimenRecord } from "#shared/api/specimen.ts";
import { isTautlineError, TautlineError } from "#shared/errors.ts";

export interface LibraryOptions {
  readonly root: string;
  readonly files: FilePort;
  readonly random: RandomBytes;
  /** UTC milliseconds. */
  readonly now: () => number;
  /** Checked before every write: the lease on the library. */
  readonly mayWrite: WriterCheck;
  readonly emit: (event: ServerEvent) => void;
  /** Called before a specimen's folder goes, so that the engine lets go of its store. */
  readonly onRemove?: (specimen: string) => Promise<void>;
}

/** The library folder: specimens, passes, journals. */
export class Library implements LibraryPort {
  readonly layout: LibraryLayout;
  readonly passes: PassStore;
  readonly claims = new PassClaims();
  /** Specimens that are assignments of a study which is led elsewhere. */
  readonly assignments: AssignmentStore;
  readonly #options: LibraryOptions;
  readonly #changes = new Turns();

  constructor(options: LibraryOptions) {
    this.#options = options;
    this.layout = libraryLayout(options.root);
    this.passes = new PassStore({ ...options, layout: this.layout });
    this.assignments = new AssignmentStore({ ...options, layout: this.layout });
  }

  /** Removes what a killed process left half-removed. Call it once, with the lease, before anything else. */
  async removeLeftovers(): Promise<void> {
    const { files } = this.#options;
    for (const { name } of (await files.list(this.layout.specimens)) ?? []) {
      if (name.endsWith(UNFINISHED)) await files.remove(join(this.layout.specimens, name));
    }
  }

  async shelf(): Promise<ShelfAnswer> {
    const specimens: ShelfSpecimen[] = [];
    const problems: string[] = [];
    for (const id of await this.#specimenIds()) {
      try {
        const specimen = await readSpecimenFile(this.#options.files, this.layout.specimenFile(id), id);
        if (!specimen) {
          const passes = await this.passes.ids(id);
          if (passes.length > 0)
            problems.push(`specimens/${id} holds passes but no specimen.json: put the file back from a copy.`);
          continue;
        }
        // What was handed back is not shown: a repeat must not be done beside the pass before.
        if (await this.assignments.isSealed(id)) continue;
        const passes: PassSummary[] = [];
        for (const pass of await this.passes.ids(id)) {
          await this.passes.summary(id, pass).then(
            (summary) => passes.push(summary),
            (error) =>
              void (isTautlineError(error, "not-found") || problems.push(`${specimen.name}, pass ${pass}: ${sentence(error)}`)),
          );
        }
        passes.sort((a, b) => a.annotator.localeCompare(b.annotator) || a.number - b.number);
        specimens.push({ specimen, passes, incomplete: false });
      } catch (error) {
        problems.push(sentence(error));
      }
    }
    specimens.sort((a, b) => b.specimen.created - a.specimen.created || a.specimen.id.localeCompare(b.specimen.id));
    return { specimens, problems };
  }

  /** @throws not-found, unreadable-input; conflict for an assignment that was handed back */
  async specimen(id: string): Promise<SpecimenRecord> {
    await this.assignments.refuseSealed(id);
    return this.specimenRecord(id);
  }

  /** The record of a specimen, also of an assignment that was handed back. @throws not-found, unreadable-input */
  async specimenRecord(id: string): Promise<SpecimenRecord> {
    const record = await readSpecimenFile(this.#options.files, this.layout.specimenFile(id), id);
    if (!record) throw new TautlineError("not-found", "There is no such specimen in the library.", { what: "specimen", id });
    return record;
  }

  changeSpecimen(id: string, patch: SpecimenPatch): Promise<SpecimenRecord> {
    return this.#changes.take(async () => {
      const changed = patchedSpecimen(await this.specimen(id), patch);
      await this.#options.mayWrite();
      await writeJson(this.#options.files, this.layout.specimenFile(id), changed);
      this.#options.emit({ event: "shelf" });
      return changed;
    });
  }

  removeSpecimen(id: string, force: boolean): Promise<void> {
    return this.#changes.take(async () => {
      const { files, mayWrite, onRemove, emit } = this.#options;
      await this.specimenRecord(id);
      if (!force) await this.#refuseWithEdits(id);
      await mayWrite();
      await onRemove?.(id);
      await this.passes.close(id);
      this.assignments.forget(id);
      const folder = this.layout.specimen(id);
      const doomed = `${folder}${UNFINISHED}`;
      try {
        // Renamed first: a process killed while thousands of files go leaves a folder that is no specimen any more.
        await files.remove(doomed);
        await files.rename(folder, doomed);
        await files.syncFolder(this.layout.specimens);
        files.reach("removal:after-rename");
        await files.remove(doomed);
      } catch (error) {
        throw await writeFault(files, folder, error);
      }
      emit({ event: "shelf" });
    });
  }

  async createPass(specimen: string, annotator: string): Promise<PassSummary> {
    await this.specimen(specimen);
    await this.assignments.refuseSecondPass(specimen);
    const summary = await this.#changes.take(() => this.passes.create(specimen, annotator));
    this.#options.emit({ event: "shelf" });
    return summary;
  }

  async readLog(specimen: string, pass: string, from: number): Promise<LogAnswer> {
    await this.assignments.refuseSealed(specimen);
    return (await this.passes.journal(specimen, pass)).read(from);
  }

  async appendLog(specimen: string, pass: string, request: AppendRequest): Promise<AppendAnswer> {
    await this.assignments.refuseSealed(specimen);
    await this.passes.refuseReturned(specimen, pass);
    // After a restart nobody has a claim: the window that writes first gets it.
    if (!this.claims.claim(specimen, pass, request.window)) {
      throw new TautlineError("held-elsewhere", "Another window is writing to this pass; this one is for reading only.", {
        what: "pass",
        holder: "another window",
      });
    }
    const answer = await this.passes.append(specimen, pass, request);
    if (answer.outcome === "appended") this.#options.emit({ event: "pass", pass, head: answer.head });
    return answer;
  }

  async keepBranch(specimen: string, pass: string, lines: readonly string[], name: string): Promise<PassSummary> {
    await this.specimen(specimen);
    this.layout.pass(specimen, pass);
    const file = { format: "tautline-pass", version: 1, state: "under-way", synthetic: false, name } as const;
    const summary = await this.#changes.take(() => this.passes.adopt(specimen, lines, file));
    this.#options.emit({ event: "shelf" });
    return summary;
  }

  async rebuildLog(specimen: string, pass: string, lines: readonly string[]): Promise<AppendAnswer> {
    await this.specimen(specimen);
    const journal = await this.#changes.take(() => this.passes.rebuild(specimen, pass, lines));
    this.#options.emit({ event: "shelf" });
    return { outcome: "appended", head: journal.head };
  }

  async claimPass(specimen: string, pass: string, window: string): Promise<boolean> {
    await this.assignments.refuseSealed(specimen);
    await this.passes.journal(specimen, pass);
    return this.claims.claim(specimen, pass, window);
  }

  async releasePass(specimen: string, pass: string, window: string): Promise<void> {
    this.claims.release(specimen, pass, window);
  }

  async setPassState(specimen: string, pass: string, state: PassState): Promise<PassSummary> {
    await this.assignments.refuseSealed(specimen);
    await this.passes.refuseReturned(specimen, pass);
    await this.#changes.take(() => this.passes.changeFile(specimen, pass, (file) => ({ ...file, state })));
    this.#options.emit({ event: "shelf" });
    return this.passes.summary(specimen, pass);
  }

  async close(): Promise<void> {
    await this.passes.close();
  }

  async #specimenIds(): Promise<string[]> {
    const entries = (await this.#options.files.list(this.layout.specimens)) ?? [];
    return entries.filter(({ name, folder }) => folder && /^[a-z0-9][a-z0-9-]*$/.test(name)).map(({ name }) => name);
  }

  async #refuseWithEdits(id: string): Promise<void> {
    let edits = 0;
    for (const pass of await this.passes.ids(id)) {
      // A journal that cannot be read may hold work: it counts.
      edits += await this.passes.summary(id, pass).then(
        (summary) => (summary.synthetic ? 0 : summary.edits),
        (error) => (isTautlineError(error, "not-found") ? 0 : 1),
      );
    }
    if (edits === 0) return;
    const what = `specimen with ${edits} edit${edits === 1 ? "" : "s"} in its passes`;
    throw new TautlineError("conflict", `The specimen's passes hold ${edits} edits; removing it would remove them.`, {
      what,
      expected: "no edits",
      found: String(edits),
    });
  }
}

function sentence(error: unknown): string {
  if (isTautlineError(error)) return error.message;
  return `Something could not be read (${(error as NodeJS.ErrnoException).code ?? "a fault of the program"}).`;
}
