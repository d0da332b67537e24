import type { RouteName } from "#shared/api/routes.ts";
import { beginningProtocol } from "#shared/study/protocol.ts";
import type { SampleStudy } from "#test/contract/sample-ports.ts";
import { SPECIMEN } from "#test/main/node/sample-library.ts";

const ticket = { window: "w1", lane: "section", number: 1 };
const plane = { origin: [0, 0, 0], u: [0.04, 0, 0], v: [0, 0.04, 0], width: 2, height: 2 };
const parameters = { polarity: "bright", blurFwhmMm: null };
const points = [0, 0, 0, 1, 1, 1];
const grey = { low: 0, high: 255 };

/** A good request for every route: path parameters filled in, and a body where the route has one. */
export function sampleRequests(
  pass: string,
  log: { epoch: string; head: { seq: number; hash: string } },
  job: string,
  given: SampleStudy = { study: "", picture: "", assignment: "" },
) {
  const study = { study: given.study };
  const assigned = { specimen: given.assignment };
  const content = beginningProtocol();
  const engine = (more: object) => ({ ticket, specimen: SPECIMEN, ...more });
  const requests: Record<RouteName, { path?: Record<string, string>; query?: string; body?: object }> = {
    hello: {},
    events: { query: "?window=w1" },
    shelf: {},
    listFolder: { body: {} },
    lookAtScan: { body: { path: "/scan.nrrd", channel: 1, time: 0 } },
    startProjections: { body: { path: "/scan.nrrd", polarity: "bright", channel: 0 } },
    projections: { path: { job } },
    startIntake: {
      body: {
        path: "/scan.nrrd",
        name: "HB-07",
        spacing: [0.04, 0.04, 0.04],
        handedness: "confirmed",
        mirror: true,
        channel: 1,
        time: 0,
        region: { crop: [0, 0, 0, 4, 3, 2], bin: 2 },
        polarity: "bright",
        facts: { species: "porcine", pressure: 100 },
      },
    },
    openDemo: { body: {} },
    openDemoStudy: { body: {} },
    cancelJob: { path: { job }, body: {} },
    specimen: { path: { specimen: SPECIMEN } },
    changeSpecimen: {
      path: { specimen: SPECIMEN },
      body: { landmarks: { annulus: { closed: true, points: [[1, 2, 3]] }, commissures: [[0, 0, 0]] } },
    },
    picture: { path: { specimen: SPECIMEN } },
    createPass: { path: { specimen: SPECIMEN }, body: { annotator: "AN-2" } },
    readLog: { path: { specimen: SPECIMEN, pass }, query: "?from=0" },
    appendLog: { path: { specimen: SPECIMEN, pass }, body: { window: "w1", epoch: log.epoch, base: log.head, lines: [] } },
    keepBranch: { path: { specimen: SPECIMEN, pass }, body: { lines: [], name: "branch" } },
    rebuildLog: { path: { specimen: SPECIMEN, pass }, body: { lines: [] } },
    claimPass: { path: { specimen: SPECIMEN, pass }, body: { window: "w1" } },
    releasePass: { path: { specimen: SPECIMEN, pass }, body: { window: "w1" } },
    finishPass: { path: { specimen: SPECIMEN, pass }, body: { state: "finished" } },
    section: { body: engine({ plane, slabMm: 0.4, slabMode: "max", quality: "still", ...grey }) },
    value: { body: { specimen: SPECIMEN, at: [1, 2, 3] } },
    histogram: { body: { specimen: SPECIMEN } },
    snap: { body: engine({ at: [0, 0, 0], normal: [0, 0, 1], slabMm: 1, reachMm: 1, polarity: "dark" }) },
    openGuide: { body: engine({ from: [0, 0, 0], parameters }) },
    previewGuide: { body: { ticket, session: "g1", to: [1, 1, 1] } },
    closeGuide: { body: { session: "g1" } },
    solve: {
      body: engine({ strands: [{ from: [0, 0, 0], via: [[1, 0, 0]], to: [2, 0, 0], legs: ["guide", "straight"] }], parameters }),
    },
    openFollow: { body: engine({ at: [0, 0, 0], parameters, traced: [points] }) },
    moreFollow: { body: { ticket, session: "f1" } },
    closeFollow: { body: { session: "f1" } },
    startSearch: {
      path: { specimen: SPECIMEN },
      body: { polarity: "bright", region: { from: [0, 0, 0], to: [1, 1, 1] } },
    },
    overlooked: { body: { specimen: SPECIMEN, pass, polarity: "bright", minimumMm: 2, withDismissed: true } },
    strip: { body: engine({ points, width: 2, height: 2, halfWidthMm: 1, turn: 90, ...grey }) },
    film: { body: engine({ points, count: 1, side: 2, halfWidthMm: 1, ...grey }) },
    surface: { body: engine({ limit: 100, polarity: "bright" }) },
    exportTrees: { body: { specimen: SPECIMEN, pass, format: "tables" } },
    studies: {},
    createStudy: { body: { name: "S2", specimens: [SPECIMEN], training: [], annotators: ["AN-1", "AN-2"], passes: 1 } },
    study: { path: study },
    changeStudy: { path: study, body: { name: "S3", annotators: ["AN-1", "AN-2"] } },
    changeProtocol: {
      path: study,
      body: { content: { ...content, analysis: { ...content.analysis, primary: "total length" } } },
    },
    freezeProtocol: { path: study, body: {} },
    reviseProtocol: { path: study, body: { reason: "a rule was unclear" } },
    addPicture: { path: study, body: { no: "picture" } },
    studyPicture: { path: { ...study, picture: given.picture } },
    makePackets: {
      path: study,
      body: { assignments: ["a1"], folder: "/stick", form: "zip", scan: "within", sign: true, waiveWashout: false },
    },
    setAsidePass: { path: { ...study, assignment: "a1" }, body: { reason: "drawn on the wrong side" } },
    studyAnalysis: { path: study },
    studyPasses: { path: study },
    exportPasses: { path: study, body: { folder: "/stick" } },
    lookAtPacket: { body: { path: "/stick/none.zip" } },
    takeInPacket: { body: { path: "/stick/none.zip", allowOpenEnds: true } },
    signature: {},
    assignment: { path: assigned },
    assignmentPicture: { path: { ...assigned, picture: given.picture } },
    makeReturn: { path: assigned, body: { folder: "/stick", form: "folder", sign: false } },
    reopenAssignment: { path: assigned, body: {} },
    removeStudy: { path: study, body: {} },
    bye: { body: { window: "w1" } },
    removeSpecimen: { path: { specimen: SPECIMEN }, body: { force: true } },
  };
  return requests;
}

/** Routes whose sample is refused for a reason of its own, with the tag: everything else answers 200. */
export const REFUSED: Partial<Record<RouteName, string>> = {
  snap: "superseded",
  keepBranch: "bad-request",
  rebuildLog: "conflict",
  addPicture: "unreadable-input",
  makePackets: "not-found",
  setAsidePass: "not-found",
  studyPasses: "conflict",
  exportPasses: "conflict",
  lookAtPacket: "not-found",
  takeInPacket: "not-found",
};
