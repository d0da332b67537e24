import { join } from "node:path";
import { makeFolder, readOrTell, writeFault } from "#main/node/disk-fault.ts";
import type { FilePort } from "#main/node/file-port.ts";
import type { WriterCheck } from "#main/node/journal.ts";
import type { LibraryLayout } from "#main/node/layout.ts";
import { Turns } from "#main/node/turns.ts";
import { readJsonFile, UNFINISHED, writeJson, writeWhole } from "#main/node/whole-file.ts";
import { isTautlineError, TautlineError, unreadable } from "#shared/errors.ts";
import { parseStudy } from "#shared/study/parse-study.ts";
import type { StudyRecord } from "#shared/study/study-record.ts";

export interface StudyStoreOptions {
  readonly files: FilePort;
  readonly layout: LibraryLayout;
  readonly mayWrite: WriterCheck;
}

/** The studies of a library: `studies/<id>/study.json`, written whole, and the pictures beside it. */
export class StudyStore {
  readonly #options: StudyStoreOptions;
  readonly #turns = new Turns();

  constructor(options: StudyStoreOptions) {
    this.#options = options;
  }

  /** All studies that can be read, newest first, and a sentence for each that cannot. */
  async all(): Promise<{ readonly studies: readonly StudyRecord[]; readonly problems: readonly string[] }> {
    const studies: StudyRecord[] = [];
    const problems: string[] = [];
    for (const id of await this.#ids()) {
      await this.read(id).then(
        (study) => studies.push(study),
        (error) => {
          if (!isTautlineError(error)) throw error;
          if (error.tag !== "not-found") problems.push(error.message);
        },
      );
    }
    studies.sort((a, b) => b.created - a.created || a.id.localeCompare(b.id));
    return { studies, problems };
  }

  /** @throws not-found, unreadable-input */
  async read(id: string): Promise<StudyRecord> {
    const { files, layout } = this.#options;
    const file = `study.json of ${id}`;
    const value = await readJsonFile(files, layout.studyFile(id), file);
    if (value === undefined)
      throw new TautlineError("not-found", "There is no such study in the library.", { what: "study", id });
    const study = parseStudy(value, file);
    if (study.id !== id) throw unreadable(file, `id ${id}, as its folder is named`, `id ${study.id}`);
    return study;
  }

  /** @throws disk-full, write-failed */
  async create(study: StudyRecord): Promise<void> {
    const { files, layout, mayWrite } = this.#options;
    await mayWrite();
    await makeFolder(files, layout.study(study.id));
    await writeJson(files, layout.studyFile(study.id), study);
  }

  /**
   * Reads a study, changes it and writes it whole; changes take turns. A change that gives the study itself back writes nothing.
   * @throws not-found, unreadable-input, disk-full, write-failed, and what `change` throws
   */
  change(id: string, change: (study: StudyRecord) => StudyRecord | Promise<StudyRecord>): Promise<StudyRecord> {
    return this.#turns.take(async () => {
      const { files, layout, mayWrite } = this.#options;
      const before = await this.read(id);
      const after = await change(before);
      if (after === before) return before;
      await mayWrite();
      await writeJson(files, layout.studyFile(id), after);
      return after;
    });
  }

  /** Removes a study with all its files. */
  remove(id: string, mayGo: (study: StudyRecord) => void): Promise<void> {
    return this.#turns.take(async () => {
      const { files, layout, mayWrite } = this.#options;
      mayGo(await this.read(id));
      await mayWrite();
      const folder = layout.study(id);
      try {
        await files.remove(`${folder}${UNFINISHED}`);
        await files.rename(folder, `${folder}${UNFINISHED}`);
        await files.syncFolder(layout.studies);
        await files.remove(`${folder}${UNFINISHED}`);
      } catch (error) {
        throw await writeFault(files, folder, error);
      }
    });
  }

  /** Removes what a killed process left half-removed. */
  async removeLeftovers(): Promise<void> {
    const { files, layout } = this.#options;
    for (const { name } of (await files.list(layout.studies)) ?? [])
      if (name.endsWith(UNFINISHED)) await files.remove(join(layout.studies, name));
  }

  async writePicture(study: string, picture: string, bytes: Uint8Array): Promise<void> {
    const { files, layout, mayWrite } = this.#options;
    await this.read(study);
    const path = layout.studyPicture(study, picture);
    await mayWrite();
    await makeFolder(files, join(layout.study(study), "pictures"));
    await writeWhole(files, path, bytes);
  }

  /** @throws not-found */
  async picture(study: string, picture: string): Promise<Uint8Array> {
    const bytes = await readOrTell(this.#options.files, this.#options.layout.studyPicture(study, picture), "the picture");
    if (!bytes) throw new TautlineError("not-found", "There is no such picture in the study.", { what: "picture", id: picture });
    return bytes;
  }

  async #ids(): Promise<string[]> {
    const entries = (await this.#options.files.list(this.#options.layout.studies)) ?? [];
    return entries.filter(({ name, folder }) => folder && /^[a-z0-9][a-z0-9-]*$/.test(name)).map(({ name }) => name);
  }
}
