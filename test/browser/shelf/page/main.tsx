import "#renderer/app/theme.css";
import "#renderer/app/app.css";
import { render } from "preact";
import { NoticeList } from "#renderer/app/notice-list.tsx";
import { Notices } from "#renderer/app/notices.ts";
import type { Services } from "#renderer/app/services.ts";
import { setTheme } from "#renderer/app/theme-choice.ts";
import { Shelf } from "#renderer/shelf/shelf.tsx";
import type { ProjectionsRequest } from "#shared/api/projections.ts";
import type { IntakeRequest, JobState, LookRequest, ServerEvent } from "#shared/api/routes.ts";
import { TautlineError } from "#shared/errors.ts";
import {
  extrasOf,
  lookOf,
  passOf,
  projectionsOf,
  shelfOfTwo,
  sliceOf,
  studiesOfTwo,
} from "#test/browser/shelf/page/made-up-shelf.ts";

// A page for tests only: the shelf over a server that is played here; `window.shelf` says what it was asked.
const query = new URLSearchParams(location.search);
setTheme(query.get("theme") === "light" ? "light" : "dark");
if (query.has("later")) localStorage.setItem("tautline-first-steps", "put away");
const specimens = query.has("empty") ? [] : shelfOfTwo();
const listeners = new Set<(event: ServerEvent) => void>();
const asked: { what: string; detail?: unknown }[] = [];
const tell = (event: ServerEvent) => {
  for (const listener of listeners) listener(event);
};
const picture = sliceOf(148);

const client = {
  shelf: async () => {
    if (query.has("broken"))
      throw new TautlineError("held-elsewhere", "The library is in use by another Tautline (process 4711).", {
        what: "library",
        holder: "4711",
      });
    return { specimens, problems: query.has("problems") ? ["specimens/x9: specimen.json is not JSON (line 3)."] : [] };
  },
  picture: async () => ({
    header: { dtype: "uint8", width: picture.width, height: picture.height, level: 3 },
    body: picture.grey,
  }),
  surface: async () => {
    const points = new Float32Array(3 * 6000);
    for (let i = 0; i < points.length; i += 3) {
      // A screw: it differs from its mirror image from every side.
      points.set([17 + 9 * Math.cos(i / 1200), 17 + 9 * Math.sin(i / 1200), 12 + i / 450 + ((i * 7) % 10) / 9], i);
    }
    return { header: { dtype: "float32", count: 6000, level: 3, threshold: 100 }, body: new Uint8Array(points.buffer) };
  },
  onEvent: (listener: (event: ServerEvent) => void) => {
    listeners.add(listener);
    return () => listeners.delete(listener);
  },
  openDemo: async () => ({ job: "demo-1" }),
  openDemoStudy: async () => ({ job: "demo-study-1" }),
  studies: { all: async () => (query.has("studies") ? studiesOfTwo() : { studies: [], assignments: [], problems: [] }) },
  cancelJob: async (job: string) => asked.push({ what: "cancel", detail: job }),
  hello: async () => ({ name: "Tautline", version: "0.1.0", shell: "loopback", library: "/data/library" }),
  lookAtScan: async (request: LookRequest) => {
    const { path } = request;
    asked.push({ what: "look", detail: request });
    if (path.includes("wrong")) {
      const [file, expected, found] = [path, "the magic NRRD0001 to NRRD0006", "'GIF89a'"];
      throw new TautlineError(
        "unreadable-input",
        `${file}: expected ${expected}, found ${found}. Choose an NRRD, TIFF or OME-Zarr scan.`,
        { file, expected, found },
      );
    }
    return { ...lookOf(!path.includes("bare")), ...extrasOf(path) };
  },
  startProjections: async (request: ProjectionsRequest) => {
    asked.push({ what: "projections", detail: request });
    const look = (change: Partial<JobState>) => job({ id: "look-1", what: "look", ...change });
    setTimeout(() => {
      look({ progress: 0.4, step: "Looking through the scan", secondsLeft: 8 });
      if (!request.path.includes("slow")) look({ state: "done", progress: 1 });
    });
    return { job: "look-1" };
  },
  projections: async () => projectionsOf(),
  startIntake: async (request: IntakeRequest) => {
    asked.push({ what: "intake", detail: request });
    return { job: "intake-1" };
  },
  createPass: async (specimen: string, annotator: string) => {
    asked.push({ what: "pass", detail: annotator });
    return passOf(specimen, annotator);
  },
  changeSpecimen: async (specimen: string, patch: unknown) => {
    asked.push({ what: "change", detail: { specimen, patch } });
  },
  removeSpecimen: async (specimen: string, force: boolean) => {
    asked.push({ what: "remove", detail: { specimen, force } });
    specimens.splice(
      specimens.findIndex((shown) => shown.specimen.id === specimen),
      1,
    );
  },
};
const services = {
  client,
  capabilities: {
    shell: "loopback",
    pickScan: async () => "/scans/bare.nrrd",
    pickPacket: async () => null,
    pickFolder: async () => null,
    pathOfDropped: () => null,
  },
  notices: new Notices(),
  goTo: (place: unknown) => asked.push({ what: "go", detail: place }),
} as unknown as Services;
const job = (change: Partial<JobState>): void =>
  tell({
    event: "job",
    job: {
      id: "intake-1",
      what: "intake",
      state: "running",
      progress: 0,
      step: "Beginning",
      bytesPerSecond: null,
      secondsLeft: null,
      ...change,
    },
  });
Object.assign(window, { shelf: { asked, job, tell } });
render(
  <>
    <Shelf services={services} handBack={null} />
    <NoticeList notices={services.notices} />
  </>,
  document.getElementById("app")!,
);
