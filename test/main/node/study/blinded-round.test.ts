import { createHash } from "node:crypto";
import { mkdtemp, readdir, readFile, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { readTreeFile } from "#main/cli/read-tree-file.ts";
import { studyOf } from "#shared/agreement/study/study.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import type { AssignmentCell, StudyView } from "#shared/api/study.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { type Matrix3, pointMm, roundPoint, sizeXyz, spacingMm, type Vec3 } from "#shared/geometry/types.ts";
import { parseStudy } from "#shared/study/parse-study.ts";
import { beginningProtocol } from "#shared/study/protocol.ts";
import { shownFromTrue, storedIndex, type Turn, turnedFrame } from "#shared/study/turn.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import { bareHandler } from "#test/contract/shells.ts";
import { samplePng } from "#test/main/node/study/sample-png.ts";
import { drawTrees, greyAt, putScan, type StudyPlace, stick, studyPlace } from "#test/main/node/study/study-place.ts";

// The whole round on the real disk: two libraries, two clocks, a stick between them.

const DAY = 86_400_000;
/** The annotator's computer is years behind the lead's. */
const LEAD_NOW = Date.UTC(2026, 11, 1);
const ANNOTATOR_NOW = Date.UTC(2019, 1, 3);

const EXCHANGED: Matrix3 = [0, -1, 0, 0, 0, 1, -1, 0, 0];
const LEFT_HANDED: Matrix3 = [1, 0, 0, 0, 1, 0, 0, 0, -1];
const grid = (size: [number, number, number], direction: Matrix3): VolumeGrid => ({
  size: sizeXyz(...size),
  spacing: spacingMm(0.0213333333, 0.04, 0.0371),
  origin: pointMm(-12.345678, 33.333333, 7.654321),
  direction,
  frame: "LPS",
});
const GRIDS = [grid([37, 70, 40], EXCHANGED), grid([33, 31, 65], LEFT_HANDED)];

let folder: string;
let lead: StudyPlace;
let annotator: StudyPlace;
let stickFolder: string;
let specimens: SpecimenRecord[];
let study: StudyView;
const leadClock = { now: LEAD_NOW };

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-round-"));
  lead = await studyPlace(join(folder, "lead"), leadClock);
  annotator = await studyPlace(join(folder, "annotator"), { now: ANNOTATOR_NOW });
  stickFolder = await stick(folder);
  specimens = [await putScan(lead, "HB-21", GRIDS[0]!, 1), await putScan(lead, "HB-22", GRIDS[1]!, 2)];
  const draft = {
    name: "Harrow Bay study",
    specimens: specimens.map(({ id }) => id),
    training: [],
    annotators: ["AN-1"],
    passes: 2,
  };
  study = await lead.studies.create(draft);
  const { picture } = await lead.studies.addPicture(study.id, samplePng("HB-21 by the lead"));
  const content = beginningProtocol();
  const points = content.drawing.points.map((rule) => (rule.point === "fork" ? { ...rule, picture } : rule));
  await lead.studies.changeProtocol(study.id, {
    content: { ...content, drawing: { ...content.drawing, points }, analysis: { ...content.analysis, primary: "total length" } },
  });
  study = await lead.studies.freezeProtocol(study.id);
});
afterAll(() => rm(folder, { recursive: true }));

/** A tree in the true frame, every place on the grid of 1e-6 mm. */
function trueTrees(scan: VolumeGrid, seed: number): ChordaeFile {
  const at = (x: number, y: number, z: number) =>
    roundPoint([scan.origin[0] + x / 7 + seed / 13, scan.origin[1] + y / 11, scan.origin[2] + z / 3]);
  const [root, fork, left, right] = [at(0, 0, 0), at(1, 2, 3), at(2, 4, 4), at(0, 5, 6)];
  const line = (a: Vec3, b: Vec3) => [a, roundPoint([(2 * a[0] + b[0]) / 3, (2 * a[1] + b[1]) / 3, (2 * a[2] + b[2]) / 3]), b];
  return {
    format: "chordae-trees",
    version: 1,
    unit: "mm",
    frame: "LPS",
    trees: [
      {
        id: "t1",
        name: "ALPM-01",
        root: "n1",
        nodes: [
          { id: "n1", kind: "origin", site: "head", muscle: "antero-lateral", head: 1, position: root },
          { id: "n2", kind: "fork", position: fork },
          { id: "n3", kind: "insertion", leaflet: "anterior", position: left },
          { id: "n4", kind: "insertion", leaflet: "posterior", position: right },
        ],
        strands: [
          {
            id: "s1",
            from: "n1",
            to: "n2",
            points: line(root, fork),
            radii: [0.2, null, 0.15],
            via: [roundPoint(line(root, fork)[1]!)],
          },
          { id: "s2", from: "n2", to: "n3", points: line(fork, left), radii: [0.1, 0.1, 0.1] },
          { id: "s3", from: "n2", to: "n4", points: line(fork, right), radii: [0.1, 0.1, 0.1], strut: true },
        ],
      },
    ],
    landmarks: { commissures: [root, fork], muscleHeads: [{ muscle: "antero-lateral", head: 1, position: root }] },
  };
}

/** The file as the annotator draws it: every place in the shown frame, on the grid of 1e-6 mm. */
function shown(file: ChordaeFile, scan: VolumeGrid, turn: Turn): ChordaeFile {
  const frame = turnedFrame(scan, turn);
  const place = (p: Vec3) => roundPoint(shownFromTrue(frame, p));
  return {
    ...file,
    trees: file.trees.map((tree) => ({
      ...tree,
      nodes: tree.nodes.map((node) => ({ ...node, position: place(node.position) })),
      strands: tree.strands.map((strand) => ({
        ...strand,
        points: strand.points!.map(place),
        ...(strand.via && { via: strand.via.map(place) }),
      })),
    })),
    landmarks: {
      commissures: file.landmarks!.commissures!.map(place),
      muscleHeads: file.landmarks!.muscleHeads!.map((head) => ({ ...head, position: place(head.position) })),
    },
  };
}

/** The key to codes and turns, which only the lead's disk holds. */
async function keyOf(id: string) {
  return parseStudy(JSON.parse(await readFile(join(lead.root, "studies", id, "study.json"), "utf8")), "study.json");
}

/** All files below a folder with their bytes. */
async function filesIn(root: string): Promise<{ path: string; bytes: Buffer }[]> {
  const names = await readdir(root, { recursive: true, withFileTypes: true });
  const files = names.filter((one) => one.isFile()).map((one) => join(one.parentPath ?? one.path, one.name));
  return Promise.all(files.map(async (path) => ({ path: path.slice(root.length + 1), bytes: await readFile(path) })));
}

/** What would give an assignment away: names, ids, hashes, facts, the seed, other codes, and the scan's true geometry. */
async function giveaways(code: string): Promise<string[]> {
  const { seed, name, assignments } = await keyOf(study.id);
  const geometry = specimens.flatMap(({ volume }) => [
    ...volume.origin.map(String),
    JSON.stringify(volume.direction).slice(1, -1),
  ]);
  const others = assignments.filter((one) => one.code !== code).flatMap((one) => [one.code, one.id]);
  const ofSpecimens = specimens.flatMap((one) => [one.id, one.name, one.volume.sha256, one.source.name, String(one.created)]);
  return [seed, name, "AN-1", "a fixation", "porcine", '"turn"', ...others, ...ofSpecimens, ...geometry];
}

const cell = (place: number): AssignmentCell => study.assignments.find((one) => one.place === place)!;

async function sendOut(place: number, form: "folder" | "zip", waiveWashout = false) {
  const request = { assignments: [cell(place).id], folder: stickFolder, form, scan: "within" as const, sign: true, waiveWashout };
  const { packets } = await lead.ended(await lead.studies.makePackets(study.id, request));
  return packets![0]!.path;
}

describe("an assignment on its way", () => {
  it("holds a turned scan and nothing that tells which valve it is", async () => {
    const packet = await sendOut(1, "folder");
    const { code, specimen } = cell(1);
    const { turn } = (await keyOf(study.id)).assignments.find((one) => one.code === code)!;
    const forbidden = await giveaways(code);
    const files = await filesIn(packet);
    for (const { path, bytes } of files)
      for (const word of forbidden) {
        expect([path, word, bytes.includes(Buffer.from(word))]).toEqual([path, word, false]);
        expect([path, word, path.includes(word)]).toEqual([path, word, false]);
      }
    const bytes = Buffer.concat(files.map((one) => one.bytes));
    for (const { volume } of specimens) expect(bytes.includes(Buffer.from(volume.sha256, "hex"))).toBe(false);
    expect(bytes.includes(Buffer.from("by the lead"))).toBe(false);

    const record = JSON.parse(await readFile(join(packet, "data", "scan", "specimen.json"), "utf8")) as SpecimenRecord;
    expect(record).toMatchObject({ name: code, created: 0, facts: {}, landmarks: {}, conversions: [] });
    expect(record.volume).toMatchObject({ origin: [0, 0, 0], direction: [1, 0, 0, 0, 1, 0, 0, 0, 1], frame: "scan" });
    // The voxels are the stored ones at their turned places, to the last: hashed here from the formula that made them.
    const index = specimens.findIndex((one) => one.id === specimen);
    const scan = GRIDS[index]!;
    const [nx, ny, nz] = turnedFrame(scan, turn).grid.size;
    const voxels = new Uint16Array(nx * ny * nz);
    let k = 0;
    for (let z = 0; z < nz; z += 1)
      for (let y = 0; y < ny; y += 1)
        for (let x = 0; x < nx; x += 1, k += 1) {
          const [a, b, c] = storedIndex(turn, scan.size, [x, y, z]);
          voxels[k] = greyAt(scan, index + 1, a, b, c);
        }
    expect(record.volume.sha256).toBe(createHash("sha256").update(voxels).digest("hex"));
    expect(record.volume.size).toEqual([nx, ny, nz]);
    await rm(packet, { recursive: true });
  });

  it("is worked on in a library whose answers tell nothing either, and comes back in the true frame bit by bit", async () => {
    for (const place of [1, 2]) {
      const { code, id, specimen } = cell(place);
      const packet = await sendOut(place, "zip");
      const { taken } = await annotator.ended(await annotator.packets.takeIn({ path: packet }));
      expect(taken).toMatchObject({ kind: "assignment", code, outcome: "taken", specimen: id });
      const view = await annotator.packets.assignment(id);
      const index = specimens.findIndex((one) => one.id === specimen);
      const { turn } = (await keyOf(study.id)).assignments.find((one) => one.id === id)!;
      const trees = trueTrees(GRIDS[index]!, place);
      await drawTrees(annotator, id, view.pass, shown(trees, GRIDS[index]!, turn), ANNOTATOR_NOW);
      await expectSilentTraffic(id, view.pass, await giveaways(code));

      const request = { folder: stickFolder, form: place === 1 ? ("zip" as const) : ("folder" as const), sign: place === 1 };
      const made = await annotator.ended(await annotator.packets.makeReturn(id, request));
      const back = await lead.ended(await lead.packets.takeIn({ path: made.packets![0]!.path }));
      expect(back.taken).toMatchObject({ kind: "return", code, outcome: "taken", specimen, study: study.id });

      const history = await lead.library.passes.history(specimen, back.taken!.pass!);
      expect(history.header).toMatchObject({ annotator: "AN-1", specimen });
      const { nodes, strands, curves, landmarks } = history.document;
      const [tree] = trees.trees;
      expect([...nodes.values()].map(({ position }) => position)).toEqual(tree!.nodes.map(({ position }) => position));
      for (const [k, strand] of [...strands.values()].entries()) {
        expect([...curves.get(strand.curve!)!.points]).toEqual(tree!.strands[k]!.points!.flat());
        expect(strand.via).toEqual(tree!.strands[k]!.via ?? []);
      }
      expect(landmarks).toEqual(trees.landmarks);
      const { returned } = (await lead.studies.study(study.id)).assignments.find((one) => one.id === id)!;
      expect(returned).toMatchObject({ trees: 1, openEnds: 0, doubts: 0, at: LEAD_NOW });
      expect(returned!.effort).toMatchObject({ edits: 1, undos: 1, redos: 1, interactionsPerTree: 3, idleThresholdMs: 120_000 });
      expect(returned!.drawn).toEqual({ from: ANNOTATOR_NOW + 10_000, to: ANNOTATOR_NOW + 10_000 });
      expect(returned!.fingerprint === null).toBe(place === 2);
    }
    study = await lead.studies.study(study.id);
    expect(study.events.filter(({ what }) => what === "pass-taken-in")[1]!.text).toMatch(
      /is not signed, though AN-1's packet before was/,
    );
  });

  it("is closed in the annotator's library once handed back, and its scan is not on the shelf", async () => {
    const { id, code } = cell(1);
    const { specimens: shelf } = await annotator.library.shelf();
    expect(shelf).toEqual([]);
    const { pass } = await annotator.packets.assignment(id);
    for (const act of [
      () => annotator.library.specimen(id),
      () => annotator.library.readLog(id, pass, 0),
      () => annotator.library.claimPass(id, pass, "w2"),
      () => annotator.library.setPassState(id, pass, "under-way"),
    ])
      await expect(act()).rejects.toMatchObject({ tag: "conflict", fields: { what: code } });
    const reopened = await annotator.packets.reopen(id);
    expect(reopened).toMatchObject({ state: "under-way", passState: "under-way" });
    await expect(annotator.library.createPass(id, "somebody")).rejects.toMatchObject({ tag: "conflict" });
    expect((await annotator.library.shelf()).specimens.map(({ specimen }) => specimen.name)).toEqual([code]);
  });

  it("goes out as a repeat only after the days of the protocol, by the lead's clock alone, or when the lead waives them", async () => {
    expect(cell(3)).toMatchObject({ why: "Of the 14 days between repeats, 14 are still to pass.", waivable: true });
    await expect(sendOut(3, "zip")).rejects.toMatchObject({ tag: "conflict" });
    leadClock.now = LEAD_NOW + 13 * DAY + 1;
    study = await lead.studies.study(study.id);
    expect(cell(3)).toMatchObject({ why: "Of the 14 days between repeats, 1 is still to pass.", earliest: LEAD_NOW + 14 * DAY });
    leadClock.now = LEAD_NOW + 14 * DAY;
    study = await lead.studies.study(study.id);
    expect(cell(3)).toMatchObject({ why: null });
    leadClock.now = LEAD_NOW + DAY;
    study = await lead.studies.study(study.id);
    expect(cell(4).why).toMatch(/comes before it in the order drawn for AN-1/);
    const packet = await sendOut(3, "zip", true);
    study = await lead.studies.study(study.id);
    expect(study.events.map(({ what }) => what)).toContain("washout-waived");
    const again = cell(1).specimen === cell(3).specimen ? cell(1) : cell(2);
    const first = (await keyOf(study.id)).assignments.find(({ id }) => id === again.id)!;
    const repeat = (await keyOf(study.id)).assignments.find(({ id }) => id === cell(3).id)!;
    expect(repeat.turn).not.toEqual(first.turn);
    const { taken } = await annotator.ended(await annotator.packets.takeIn({ path: packet }));
    const both = await Promise.all([
      annotator.library.specimenRecord(first.id),
      annotator.library.specimenRecord(taken!.specimen),
    ]);
    expect(both[0]!.volume.sha256).not.toBe(both[1]!.volume.sha256);
  });
});

describe("the passes that came back", () => {
  it("are given as tree files in the true frame, with annotator, pass and protocol, for the agreement", async () => {
    const { refusal, passes, awaited } = await lead.studies.analysis(study.id);
    expect({ refusal, passes: passes.length, awaited }).toEqual({
      refusal: "No specimen has two passes that count yet.",
      passes: 2,
      awaited: 2,
    });
    await expect(lead.studies.passes(study.id)).rejects.toMatchObject({ tag: "conflict" });
    const { id, code } = cell(3);
    const { pass } = await annotator.packets.assignment(id);
    const { turn, specimen } = (await keyOf(study.id)).assignments.find((one) => one.id === id)!;
    const index = specimens.findIndex((one) => one.id === specimen);
    await drawTrees(annotator, id, pass, shown(trueTrees(GRIDS[index]!, 9), GRIDS[index]!, turn), ANNOTATOR_NOW + 20 * DAY);
    const made = await annotator.ended(await annotator.packets.makeReturn(id, { folder: stickFolder, form: "zip", sign: true }));
    await lead.ended(await lead.packets.takeIn({ path: made.packets![0]!.path }));
    const { files } = await lead.studies.passes(study.id);
    expect(files).toHaveLength(3);
    for (const { file } of files) {
      const of = specimens.find((one) => one.name === file.volume!.name)!;
      expect(file.volume).toMatchObject({ sha256: of.volume.sha256, origin: of.volume.origin, direction: of.volume.direction });
      expect(file).toMatchObject({ frame: "LPS", annotator: "AN-1", protocol: { id: study.id, version: 1 } });
      expect(JSON.stringify(file)).not.toContain(code);
    }
    expect(files.map(({ file }) => file.pass).sort()).toEqual([1, 1, 2]);
    // The command line's reading of the same files: sorted by scan, annotator and pass.
    const { written } = await lead.studies.exportPasses(study.id, { folder: join(folder, "exported") });
    const read = await Promise.all(written.map(async (name) => ({ name, file: await readTreeFile(name) })));
    const sorted = studyOf(read, 0.3, null);
    expect(sorted.warnings).toEqual([]);
    expect(sorted.specimens.map((one) => [one.name, one.passes.map(({ pass: number }) => number)]).sort()).toEqual(
      specimens.map(({ name, id: one }) => [name, one === specimen ? [1, 2] : [1]]).sort(),
    );
  });
});

/** Asks everything an annotator's window asks, and looks for anything that would give the assignment away. */
async function expectSilentTraffic(specimen: string, pass: string, forbidden: readonly string[]): Promise<void> {
  const shell = await bareHandler(annotatorPorts(), (fault) => {
    throw fault;
  });
  for (const target of [
    "/api/shelf",
    "/api/studies",
    `/api/specimens/${specimen}`,
    `/api/assignments/${specimen}`,
    `/api/passes/${specimen}/${pass}/log?from=0`,
    "/api/signature",
  ]) {
    const answer = await shell.send(target);
    const text = await answer.text();
    expect([target, answer.status]).toEqual([target, 200]);
    // Codes of assignments that this annotator has are no secret here.
    const own = (await annotator.library.assignments.all()).assignments.flatMap((one) => [one.code, one.specimen]);
    for (const word of forbidden)
      if (!own.includes(word)) expect([target, word, text.includes(word)]).toEqual([target, word, false]);
  }
}

function annotatorPorts() {
  const { library, studies, packets } = annotator;
  return {
    hello: () => ({ name: "Tautline", version: "0", shell: "loopback", library: "/x" }),
    library,
    studies,
    packets,
  } as never;
}
