import { randomBytes } from "node:crypto";
import { join } from "node:path";
import type { Ports } from "#main/http/ports.ts";
import type { Abilities } from "#main/node/abilities.ts";
import { makeFolder } from "#main/node/disk-fault.ts";
import { diskFiles } from "#main/node/disk-files.ts";
import { Events } from "#main/node/events.ts";
import { exportTrees } from "#main/node/export-trees.ts";
import { folders } from "#main/node/folders.ts";
import { Jobs } from "#main/node/jobs.ts";
import { createId } from "#main/node/layout.ts";
import { processFacts, takeLease } from "#main/node/lease.ts";
import { Library } from "#main/node/library.ts";
import { pageFiles } from "#main/node/page-files.ts";
import { scanLooks } from "#main/node/scan-looks.ts";
import { Searches } from "#main/node/searches.ts";
import { specimenJobs } from "#main/node/specimen-jobs.ts";
import { studyPorts } from "#main/node/study/study-ports.ts";
import { WindowLife } from "#main/node/window-life.ts";
import type { HelloAnswer } from "#shared/api/routes.ts";

export interface WorkplaceOptions {
  /** The library's folder; made when it is not there. */
  readonly root: string;
  readonly shell: HelloAnswer["shell"];
  readonly version: string;
  /** Folder of the built page. */
  readonly page: string;
  readonly graceMs: number;
  /** The last page has gone, its grace period has passed, and no job runs. */
  readonly onAllLeft: () => void;
  readonly onFault: (error: unknown) => void;
  /** Called once the lease is ours. */
  readonly abilities: (library: Library) => Promise<Abilities>;
}

/** The library opened for writing with everything the handler needs. */
export interface Workplace {
  readonly ports: Ports;
  readonly library: Library;
  /** Stops jobs, closes engine and journals, gives the lease back. */
  close(): Promise<void>;
}

/** Takes the lease on the library and opens it. @throws held-elsewhere, write-failed, disk-full */
export async function openWorkplace(options: WorkplaceOptions): Promise<Workplace> {
  const { root, onFault } = options;
  const files = diskFiles();
  const random = (count: number) => new Uint8Array(randomBytes(count));
  const newId = () => createId(random);
  await makeFolder(files, join(root, "specimens"));
  const what = options.shell === "electron" ? "the desktop program" : "the server";
  const lease = await takeLease({ files, path: join(root, "lease.json"), what, facts: processFacts(), random });
  try {
    const events = new Events();
    const emit: Events["emit"] = (event) => events.emit(event);
    const now = Date.now;
    const mayWrite = () => lease.check();
    const library = new Library({
      root,
      files,
      random,
      now,
      mayWrite,
      emit,
      onRemove: async (specimen) => {
        await search.forget(specimen);
        await abilities.forgetSpecimen?.(specimen);
      },
    });
    await library.removeLeftovers();
    const abilities = await options.abilities(library);
    const jobs = new Jobs({ now, newId, emit, onFault });
    const search = new Searches({ library, files, engine: abilities.engine, jobs, now, mayWrite });
    const windows = new WindowLife({
      graceMs: options.graceMs,
      onLeft: (window) => library.claims.releaseAll(window),
      onAllLeft: () => {
        // A search goes on where it stopped when a page is opened again; nobody waits for it now.
        search.stop();
        void jobs.idle().then(() => windows.open === 0 && options.onAllLeft());
      },
    });
    const study = studyPorts({ library, files, jobs, abilities, random, now, mayWrite, emit, softwareVersion: options.version });
    await study.store.removeLeftovers();
    const ports: Ports = {
      hello: () => {
        const { version, shell } = options;
        return { name: "Tautline", version, shell, library: root, work: abilities.engine.load() };
      },
      library,
      engine: abilities.engine,
      jobs: specimenJobs({ root, library, abilities, jobs, studies: study.store, newId, now, emit }),
      search,
      scans: scanLooks(abilities, jobs),
      folders: folders(),
      exports: exportTrees({ library, files, softwareVersion: options.version, runLabels: abilities.runLabels, newId }),
      studies: study.studies,
      packets: study.packets,
      events,
      page: pageFiles(options.page),
      windows,
    };
    return {
      ports,
      library,
      async close() {
        windows.stop();
        await jobs.close();
        await search.close();
        await abilities.engine.close();
        await library.close();
        await lease.release();
      },
    };
  } catch (error) {
    await lease.release().catch(() => undefined);
    throw error;
  }
}
