import { mkdir, mkdtemp, rm, symlink, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import type { Ports } from "#main/http/ports.ts";
import { Events } from "#main/node/events.ts";
import { folders } from "#main/node/folders.ts";
import { Jobs } from "#main/node/jobs.ts";
import type { Library } from "#main/node/library.ts";
import { pageFiles } from "#main/node/page-files.ts";
import { studyPorts } from "#main/node/study/study-ports.ts";
import type { Engine } from "#shared/api/engine.ts";
import type { ProjectionsAnswer } from "#shared/api/projections.ts";
import type { ScanLookAnswer } from "#shared/api/routes.ts";
import { TautlineError } from "#shared/errors.ts";
import { beginningProtocol } from "#shared/study/protocol.ts";
import { putSpecimen, SPECIMEN, sampleLibrary } from "#test/main/node/sample-library.ts";
import { countingBytes } from "#test/main/node/sample-log.ts";
import { samplePng } from "#test/main/node/study/sample-png.ts";
import { UnsyncedFiles } from "#test/main/node/unsynced-files.ts";

/** What no answer may ever hold: it lies outside the page's folder. */
export const SECRET = "the secret outside";

export interface SamplePorts {
  readonly ports: Ports;
  readonly pass: string;
  readonly left: string[];
  readonly seen: string[];
  /** Requests that reached the engine, by method. */
  readonly asked: Map<string, unknown>;
  readonly job: string;
  /** A study with an unfrozen protocol and a picture, and an assignment of another study. */
  readonly study: SampleStudy;
  close(): Promise<void>;
}

export interface SampleStudy {
  readonly study: string;
  readonly picture: string;
  readonly assignment: string;
}

/** Real library, page files and jobs; an engine that answers with what it was asked. */
export async function samplePorts(): Promise<SamplePorts> {
  const folder = await mkdtemp(join(tmpdir(), "tautline-contract-"));
  const page = join(folder, "page");
  await mkdir(join(page, "assets"), { recursive: true });
  await writeFile(join(page, "index.html"), "<!doctype html><title>Tautline</title>");
  await writeFile(join(page, "assets", "page-1a2b.js"), "export {};");
  await writeFile(join(page, "assets", "page-1a2b.css"), "body{}");
  await writeFile(join(folder, "secret.html"), SECRET);
  await symlink(join(folder, "secret.html"), join(page, "way-out.html"));
  await symlink(folder, join(page, "way-up"));

  const files = new UnsyncedFiles();
  const { library } = sampleLibrary(files);
  await putSpecimen(files, library);
  const { id: pass } = await library.createPass(SPECIMEN, "AN-1");
  const asked = new Map<string, unknown>();
  const events = new Events();
  const jobs = new Jobs({ now: Date.now, newId: () => "job1", emit: (event) => events.emit(event), onFault: () => {} });
  const { job } = jobs.start("intake", async () => ({ specimen: SPECIMEN }));
  await jobs.idle();
  const seen: string[] = [];
  const left: string[] = [];
  const study = studyPorts({
    library,
    files,
    jobs,
    abilities: {
      runTurned: async () => {
        throw new Error("no scan is turned here");
      },
    },
    random: countingBytes(),
    now: Date.now,
    mayWrite: async () => {},
    emit: (event) => events.emit(event),
    softwareVersion: "0.0.0",
  });
  const ports: Ports = {
    hello: () => {
      const work = { waiting: 0, running: 0 };
      return { name: "Tautline", version: "0.0.0", shell: "loopback", library: "/library", work };
    },
    library,
    engine: sampleEngine(asked),
    jobs: {
      startIntake: async (request) => {
        asked.set("intake", request);
        return { job };
      },
      openDemo: async () => ({ job }),
      openDemoStudy: async () => ({ job }),
      cancel: async (id) => jobs.cancel(id),
      jobs: () => jobs.states(),
    },
    search: {
      start: async (specimen, request) => {
        asked.set("search", { specimen, request });
        return { job };
      },
      overlooked: async (request) => {
        asked.set("overlooked", request);
        return { stretches: [], search: { polarity: request.polarity, done: 0, total: 1, job: null } };
      },
    },
    scans: {
      startProjections: async (request) => {
        asked.set("projections", request);
        return { job };
      },
      projections: async () => ({ slices: 1, of: 1 }) as unknown as ProjectionsAnswer,
      look: async ({ path }) => {
        if (path === "/fault") throw new Error("ENOENT: /home/someone/secret at Object.<anonymous> (/srv/x.ts:1:1)");
        return { path } as unknown as ScanLookAnswer;
      },
    },
    folders: folders(() => folder),
    exports: {
      exportTrees: async (request) =>
        request.path === undefined
          ? { name: "HB-07 über.zip", type: "application/zip", bytes: Uint8Array.of(1, 2, 3), lost: ["pins"] }
          : { written: [request.path], lost: [] },
    },
    studies: study.studies,
    packets: study.packets,
    events,
    page: pageFiles(page),
    windows: { seen: (window) => void seen.push(window), left: (window) => void left.push(window) },
  };
  const sampleStudy = await putStudy(files, library, study);
  return { ports, pass, left, seen, asked, job, study: sampleStudy, close: () => rm(folder, { recursive: true }) };
}

/** Puts a study, and an assignment as one stands after it was taken in, and a folder for packets. */
async function putStudy(
  files: UnsyncedFiles,
  library: Library,
  { studies }: ReturnType<typeof studyPorts>,
): Promise<SampleStudy> {
  await files.makeFolder("/stick");
  const { id } = await studies.create({ name: "S", specimens: [SPECIMEN], training: [], annotators: ["AN-1"], passes: 2 });
  const { picture } = await studies.addPicture(id, samplePng());
  const assignment = "a0000000000000000001";
  await putSpecimen(files, library, assignment);
  const { id: pass } = await library.passes.create(assignment, "BCDF-GHJK");
  await files.makeFolder(join(library.layout.specimen(assignment), "pictures"));
  await files.create(library.layout.assignmentPicture(assignment, picture), samplePng());
  await library.assignments.write({
    format: "tautline-assignment",
    version: 1,
    study: "f0000000000000000001",
    assignment,
    code: "BCDF-GHJK",
    training: false,
    protocol: { version: 1, sha256: "1".repeat(64) },
    rules: beginningProtocol().drawing,
    pass,
    taken: 5,
    packet: "2".repeat(64),
    from: null,
    returned: null,
  });
  return { study: id, picture, assignment };
}

function sampleEngine(asked: Map<string, unknown>): Engine {
  const note =
    <T>(name: string, answer: T) =>
    async (request: unknown): Promise<T> => {
      asked.set(name, request);
      return answer;
    };
  const frame = (header: object) => ({ header: header as never, body: Uint8Array.of(7, 8, 9, 10) });
  return {
    section: note("section", frame({ dtype: "uint8", width: 2, height: 2, level: 0 })),
    value: note("value", { value: 5, index: [0, 0, 0] as const }),
    histogram: note("histogram", { min: 0, max: 1, counts: [1], low: 0, high: 1 }),
    snap: async () => {
      throw new TautlineError("superseded", "A newer request took over.", { lane: "guide", number: 1 });
    },
    openGuide: note("openGuide", { session: "g1" }),
    previewGuide: note("previewGuide", { points: [], coarse: true, imageFit: null, doubtful: [] }),
    closeGuide: note("closeGuide", undefined),
    solve: note("solve", { curves: [] }),
    openFollow: note("openFollow", { session: "f1" }),
    moreFollow: note("moreFollow", { done: true, growing: [], lengthMm: 0, proposal: null }),
    closeFollow: note("closeFollow", undefined),
    searchLevel: async () => ({ level: 0, size: [64, 64, 64], spacing: [1, 1, 1], factor: [1, 1, 1] }) as never,
    searchBlock: async () => ({
      voxels: new Int32Array(0),
      strengths: new Float32Array(0),
      radii: new Float32Array(0),
      shares: new Float32Array(0),
    }),
    stretches: note("stretches", []),
    endSearch: () => {},
    strip: note("strip", frame({ dtype: "uint8", width: 2, height: 2, lengthMm: 1 })),
    film: note("film", frame({ dtype: "uint8", count: 1, side: 2, at: [0] })),
    surface: note("surface", frame({ dtype: "float32", count: 0, level: 0, threshold: 0 })),
    load: () => ({ waiting: 0, running: 0 }),
    close: async () => {},
  };
}
