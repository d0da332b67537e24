import { randomBytes } from "node:crypto";
import { join } from "node:path";
import type { EventsPort, ExportPort, Ports, ScansPort } from "#main/http/ports.ts";
import { diskFiles } from "#main/node/disk-files.ts";
import { Events } from "#main/node/events.ts";
import { folders } from "#main/node/folders.ts";
import { hideFolders } from "#main/node/hide-folders.ts";
import { Jobs, type JobWork } from "#main/node/jobs.ts";
import { createId } from "#main/node/layout.ts";
import { type Lease, processFacts, takeLease } from "#main/node/lease.ts";
import { Library } from "#main/node/library.ts";
import { pageFiles } from "#main/node/page-files.ts";
import { WindowLife } from "#main/node/window-life.ts";
import type { Engine } from "#shared/api/engine.ts";
import type { HelloAnswer, IntakeRequest } from "#shared/api/routes.ts";

/** What the entry points bring in from the engine's and the intake's folders. */
export interface Abilities {
  readonly engine: Engine;
  readonly scans: ScansPort;
  /** Takes a scan in as a specimen of the library. */
  readonly intake: (request: IntakeRequest) => JobWork;
  /** The demo valve: the specimen that holds it already, or the work that makes it. */
  readonly demo: { find(): Promise<string | undefined>; make: JobWork };
  readonly exports: ExportPort;
}

export interface WorkplaceOptions {
  readonly root: string;
  readonly shell: HelloAnswer["shell"];
  readonly version: string;
  /** Folder of the built page. */
  readonly page: string;
  readonly graceMs: number;
  /** The last page has gone, its grace period has passed, and no job runs. */
  readonly onAllLeft: () => void;
  readonly onFault: (error: unknown) => void;
  readonly abilities: (library: Library) => Promise<Abilities>;
}

/** The library opened for writing with everything the handler needs. */
export interface Workplace {
  readonly ports: Ports;
  readonly library: Library;
  readonly lease: Lease;
  /** Stops jobs, closes journals, gives the lease back. */
  close(): Promise<void>;
}

/** Takes the lease on the library and opens it. @throws held-elsewhere, write-failed */
export async function openWorkplace(options: WorkplaceOptions): Promise<Workplace> {
  const { root, onFault } = options;
  const files = diskFiles();
  const random = (count: number) => new Uint8Array(randomBytes(count));
  await files.makeFolder(join(root, "specimens"));
  const lease = await takeLease({ files, path: join(root, "lease.json"), what: "server", facts: processFacts(), random });
  const events = new Events();
  const emit: Events["emit"] = (event) => events.emit(event);
  const library = new Library({ root, files, random, now: Date.now, mayWrite: () => lease.check(), emit });
  const jobs = new Jobs({ now: Date.now, newId: () => createId(random), emit, onFault });
  const abilities = await library
    .removeLeftovers()
    .then(() => options.abilities(library))
    .catch(async (error) => {
      await lease.release();
      throw error;
    });
  const windows = new WindowLife({
    graceMs: options.graceMs,
    onLeft: (window) => library.claims.releaseAll(window),
    onAllLeft: () => void jobs.idle().then(() => windows.open === 0 && options.onAllLeft()),
  });
  const shelfChanges =
    (work: JobWork): JobWork =>
    async (report, signal) => {
      const result = await work(report, signal);
      emit({ event: "shelf" });
      return result;
    };
  const ports: Ports = {
    hello: () => ({ name: "Tautline", version: options.version, shell: options.shell, library: root }),
    library,
    engine: abilities.engine,
    jobs: {
      startIntake: async (request) => jobs.start("intake", shelfChanges(abilities.intake(request))),
      openDemo: async () => {
        const specimen = await abilities.demo.find();
        return specimen ? jobs.startDone("demo", { specimen }) : jobs.start("demo", shelfChanges(abilities.demo.make));
      },
      cancel: async (job) => jobs.cancel(job),
      jobs: () => jobs.states(),
    },
    scans: {
      look: (path) =>
        abilities.scans.look(path).catch((error) => {
          throw hideFolders(error, path);
        }),
    },
    folders: folders(),
    exports: abilities.exports,
    events: events satisfies EventsPort,
    page: pageFiles(options.page),
    windows,
  };
  return {
    ports,
    library,
    lease,
    async close() {
      windows.stop();
      await jobs.close();
      await abilities.engine.close();
      await library.close();
      await lease.release();
    },
  };
}
