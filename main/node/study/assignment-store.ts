import type { FilePort } from "#main/node/file-port.ts";
import type { WriterCheck } from "#main/node/journal.ts";
import type { LibraryLayout } from "#main/node/layout.ts";
import { readPassFile } from "#main/node/pass-file.ts";
import { readJsonFile, writeJson } from "#main/node/whole-file.ts";
import type { AssignmentSummary } from "#shared/api/study.ts";
import { isTautlineError, TautlineError, unreadable } from "#shared/errors.ts";
import { type AssignmentRecord, parseAssignment } from "#shared/study/assignment-record.ts";

export interface AssignmentStoreOptions {
  readonly files: FilePort;
  readonly layout: LibraryLayout;
  readonly mayWrite: WriterCheck;
}

/** The assignments that a library has taken in; each stands beside the scan it came with. */
export class AssignmentStore {
  readonly #options: AssignmentStoreOptions;
  /** What is on the disk, once read: asked for with every edit. */
  readonly #known = new Map<string, AssignmentRecord | null>();

  constructor(options: AssignmentStoreOptions) {
    this.#options = options;
  }

  /** The assignment that a specimen is; null for any other specimen. @throws unreadable-input */
  async find(specimen: string): Promise<AssignmentRecord | null> {
    const known = this.#known.get(specimen);
    if (known !== undefined) return known;
    const found = await this.#read(specimen);
    this.#known.set(specimen, found);
    return found;
  }

  /** True for an assignment whose pass was handed back. */
  async isSealed(specimen: string): Promise<boolean> {
    return (await this.find(specimen))?.returned?.sealed ?? false;
  }

  /** @throws conflict for an assignment whose pass was handed back */
  async refuseSealed(specimen: string): Promise<void> {
    const record = await this.find(specimen);
    if (!record?.returned?.sealed) return;
    const sentence = `${record.code} was handed back and is closed. Reopen the assignment if the lead asks for it again.`;
    throw new TautlineError("conflict", sentence, {
      what: record.code,
      expected: "an open assignment",
      found: "one handed back",
    });
  }

  /** @throws conflict for any assignment: it has its one pass */
  async refuseSecondPass(specimen: string): Promise<void> {
    const record = await this.find(specimen);
    if (!record) return;
    const sentence = `${record.code} is an assignment and has its one pass; go on with that.`;
    throw new TautlineError("conflict", sentence, {
      what: record.code,
      expected: "a specimen of this library",
      found: "an assignment",
    });
  }

  /** Forgets what is in memory of a specimen that is removed. */
  forget(specimen: string): void {
    this.#known.delete(specimen);
  }

  async #read(specimen: string): Promise<AssignmentRecord | null> {
    const { files, layout } = this.#options;
    const file = `assignment.json of ${specimen}`;
    const value = await readJsonFile(files, layout.assignmentFile(specimen), file);
    if (value === undefined) return null;
    const record = parseAssignment(value, file);
    if (record.assignment !== specimen) throw unreadable(file, `assignment ${specimen}`, `assignment ${record.assignment}`);
    return record;
  }

  /** @throws not-found, unreadable-input */
  async read(specimen: string): Promise<AssignmentRecord> {
    const found = await this.find(specimen);
    if (!found)
      throw new TautlineError("not-found", "There is no such assignment in the library.", { what: "assignment", id: specimen });
    return found;
  }

  /** @throws disk-full, write-failed */
  async write(record: AssignmentRecord): Promise<void> {
    const { files, layout, mayWrite } = this.#options;
    await mayWrite();
    this.#known.delete(record.assignment);
    await writeJson(files, layout.assignmentFile(record.assignment), record);
  }

  /** All assignments, newest first, and a sentence for each that cannot be read. */
  async all(): Promise<{ readonly assignments: readonly AssignmentSummary[]; readonly problems: readonly string[] }> {
    const { files, layout } = this.#options;
    const assignments: AssignmentSummary[] = [];
    const problems: string[] = [];
    for (const { name, folder } of (await files.list(layout.specimens)) ?? []) {
      if (!folder || !/^[a-z0-9][a-z0-9-]*$/.test(name)) continue;
      try {
        const record = await this.find(name);
        if (record) assignments.push(await this.summary(record));
      } catch (error) {
        if (!isTautlineError(error)) throw error;
        problems.push(error.message);
      }
    }
    assignments.sort((a, b) => b.taken - a.taken || a.code.localeCompare(b.code));
    return { assignments, problems };
  }

  async summary({ assignment, code, pass, taken, returned }: AssignmentRecord): Promise<AssignmentSummary> {
    const { files, layout } = this.#options;
    const { state: passState } = await readPassFile(files, layout.passFile(assignment, pass));
    return { specimen: assignment, code, pass, state: returned?.sealed ? "returned" : "under-way", passState, taken };
  }
}
