import { unzipSync, zipSync } from "fflate";
import { beforeEach, describe, expect, it } from "vitest";
import type { StudyView } from "#shared/api/study.ts";
import { handMadeBag } from "#test/main/node/packet/sample-bag.ts";
import {
  ANNOTATOR,
  assignmentAt,
  drawTree,
  LEAD,
  leadStudy,
  type MemoryPlace,
  memoryPlace,
  packetOut,
  returned,
  STICK,
  takenIn,
} from "#test/main/node/study/memory-place.ts";
import { UnsyncedFiles } from "#test/main/node/unsynced-files.ts";

let files: UnsyncedFiles;
let lead: MemoryPlace;
let annotator: MemoryPlace;
let study: StudyView;
beforeEach(async () => {
  files = new UnsyncedFiles();
  lead = memoryPlace(files, LEAD, { now: 1_000_000 }, 1);
  annotator = memoryPlace(files, ANNOTATOR, { now: 5 }, 2);
  study = await leadStudy(files, lead);
});

/** The disk below a folder, for seeing that nothing was changed. */
async function diskBelow(folder: string): Promise<string[]> {
  const below = files.paths().filter((path) => path.startsWith(folder));
  return Promise.all(below.map(async (path) => `${path} ${Buffer.from((await files.read(path))!).toString("base64")}`));
}

/** Runs a refused act and checks that the library is as it was, byte for byte. */
async function refused(root: string, act: () => Promise<unknown>, sentence: RegExp): Promise<void> {
  const before = await diskBelow(root);
  await expect(act()).rejects.toThrow(sentence);
  expect(await diskBelow(root)).toEqual(before);
}

/** An assignment out, drawn and handed back; gives its packet. */
async function roundTrip(
  place = 1,
  end: "insertion" | "open" = "insertion",
): Promise<{ path: string; specimen: string; pass: string }> {
  const { specimen, pass } = await takenIn(annotator, await packetOut(lead, study, place));
  await drawTree(annotator, specimen, pass!, end);
  return { path: await returned(annotator, specimen), specimen, pass: pass! };
}

/** The zip with one of its files changed, made anew by another library; the manifests stay as they are unless `whole`. */
async function repacked(path: string, change: (files: Record<string, string>) => void, whole = false): Promise<string> {
  const inside = unzipSync((await files.read(path))!);
  const [first] = Object.keys(inside);
  const top = first!.slice(0, first!.indexOf("/"));
  const texts = Object.fromEntries(
    Object.entries(inside).map(([name, bytes]) => [name.slice(top.length + 1), Buffer.from(bytes).toString()]),
  );
  change(texts);
  const payload = Object.fromEntries(
    Object.entries(texts).flatMap(([name, text]) => (name.startsWith("data/") ? [[name.slice(5), text]] : [])),
  );
  const made = whole ? handMadeBag(payload) : texts;
  const target = `${STICK}/changed.zip`;
  await files.remove(target);
  await files.create(
    target,
    zipSync(Object.fromEntries(Object.entries(made).map(([name, text]) => [`${top}/${name}`, Buffer.from(text)]))),
  );
  return target;
}

describe("a returned pass", () => {
  it("is known when it is taken in twice, in whatever form it was copied", async () => {
    const { path } = await roundTrip();
    const first = await takenIn(lead, path);
    const before = await diskBelow(LEAD);
    expect(await takenIn(lead, path)).toEqual({ ...first, outcome: "known", notes: [] });
    const copied = await repacked(path, () => {});
    expect(await takenIn(lead, copied)).toMatchObject({ outcome: "known", pass: first.pass });
    expect(await diskBelow(LEAD)).toEqual(before);
  });

  it("stays as it was handed over, and keeps its specimen from being removed", async () => {
    const { path } = await roundTrip();
    const { specimen, pass } = await takenIn(lead, path);
    const touch = () => drawTree(lead, specimen, pass!, "insertion", 8_000_000);
    await refused(LEAD, touch, /came back from an annotator of a study and stays as it was handed over/);
    await refused(LEAD, () => lead.library.setPassState(specimen, pass!, "under-way"), /stays as it was handed over/);
    await refused(LEAD, () => lead.library.removeSpecimen(specimen, false), /hold 1 edits/);
  });

  it("that was tampered with is refused, naming the file, what was expected and what was found", async () => {
    const { path } = await roundTrip();
    const tampered = await repacked(path, (inside) => {
      inside["data/journal.jsonl"] = inside["data/journal.jsonl"]!.replace("0.02", "0.03");
    });
    await refused(
      LEAD,
      () => takenIn(lead, tampered),
      /journal.jsonl\): expected the SHA-256 [0-9a-f]+..., found [0-9a-f]+.... It was changed or damaged/,
    );
  });

  it("whose log was changed with its manifests is refused by the log's own chain", async () => {
    const { path } = await roundTrip();
    const tampered = await repacked(
      path,
      (inside) => {
        inside["data/journal.jsonl"] = inside["data/journal.jsonl"]!.replace('"session":"s1"', '"session":"s2"');
      },
      true,
    );
    await refused(LEAD, () => takenIn(lead, tampered), /journal.jsonl: expected 2 lines, the last with hash/);
  });

  it("whose trees are not those of its log is refused", async () => {
    const { path } = await roundTrip();
    const tampered = await repacked(
      path,
      (inside) => {
        inside["data/pass.chordae.json"] = inside["data/pass.chordae.json"]!.replace("0.02", "0.05");
      },
      true,
    );
    await refused(
      LEAD,
      () => takenIn(lead, tampered),
      /pass.chordae.json: expected the trees that the log ends with, found others/,
    );
  });

  it("that was cut short is refused", async () => {
    const { path } = await roundTrip();
    files.tamper(path, (bytes) => bytes.slice(0, bytes.length - 300));
    await refused(LEAD, () => takenIn(lead, path), /a zip file, found a file without a zip's end.* cut short or damaged/);
  });

  it("of a study that this library does not lead is refused, and so is one in the annotator's library", async () => {
    const { path } = await roundTrip();
    await refused(ANNOTATOR, () => takenIn(annotator, path), /belongs to a study that this library does not lead/);
    const other = memoryPlace(files, "/other", { now: 5 }, 3);
    await expect(takenIn(other, path)).rejects.toMatchObject({ tag: "not-found" });
    expect((await other.packets.look(path)).refusal).toMatch(/does not lead/);
  });

  it("under another version of the protocol than went out last is refused; the one drawn by the newer rules is taken", async () => {
    const { path, specimen, pass } = await roundTrip();
    await lead.studies.reviseProtocol(study.id, { reason: "the rule for forks was unclear" });
    const { content } = (await lead.studies.study(study.id)).protocol;
    const points = content.drawing.points.map((rule) => (rule.point === "fork" ? { ...rule, text: "Another rule." } : rule));
    const { protocol } = await lead.studies.changeProtocol(study.id, {
      content: { ...content, drawing: { ...content.drawing, points } },
    });
    expect(protocol.touches.map(({ key, part }) => [key, part])).toEqual([["drawing.points", "drawing"]]);
    await expect(packetOut(lead, study, 1)).rejects.toThrow(/Version 2 of the protocol is not frozen/);
    study = await lead.studies.freezeProtocol(study.id);
    await files.remove(`${STICK}/${assignmentAt(study, 1).code}-assignment.zip`);
    const newer = await packetOut(lead, study, 1);
    await refused(
      LEAD,
      () => takenIn(lead, path),
      /was drawn under version 1 of the protocol, but its assignment went out under version 2/,
    );
    await refused(
      ANNOTATOR,
      () => takenIn(annotator, newer),
      /was begun under version 1 of the protocol and this packet holds version 2: its 1 edit /,
    );
    expect(pass).toBe((await annotator.packets.assignment(specimen)).pass);
  });

  it("with open ends is refused, naming them, unless the lead allows it, which is noted", async () => {
    const { path } = await roundTrip(1, "open");
    await refused(LEAD, () => takenIn(lead, path), /has 1 open end: ALPM-01 \(n2\). It was not taken in/);
    expect(await takenIn(lead, path, { allowOpenEnds: true })).toMatchObject({ outcome: "taken" });
    study = await lead.studies.study(study.id);
    expect(study.events.map(({ what }) => what)).toContain("open-ends-allowed");
    expect(assignmentAt(study, 1).returned).toMatchObject({ openEnds: 1 });
  });

  it("with another log than the one that is here is refused until that one is set aside, and neither is lost", async () => {
    const { path, specimen, pass } = await roundTrip();
    const first = await takenIn(lead, path);
    await annotator.packets.reopen(specimen);
    await drawTree(annotator, specimen, pass, "insertion", 7_050_000);
    await files.remove(path);
    const again = await returned(annotator, specimen);
    await refused(LEAD, () => takenIn(lead, again), /has come back already, with another log. The pass that is here stays/);
    study = await lead.studies.setAside(study.id, assignmentAt(study, 1).id, { reason: "a tree was missing" });
    expect(assignmentAt(study, 1)).toMatchObject({ state: "out", returned: null });
    const second = await takenIn(lead, again);
    expect(second.pass).not.toBe(first.pass);
    study = await lead.studies.study(study.id);
    expect(assignmentAt(study, 1).setAside).toMatchObject([{ pass: first.pass, reason: "a tree was missing" }]);
    expect(assignmentAt(study, 1).returned).toMatchObject({ pass: second.pass, trees: 2 });
    const specimenId = assignmentAt(study, 1).specimen;
    expect((await lead.library.passes.history(specimenId, first.pass!)).document.trees.size).toBe(1);
  });

  it("is told before it is taken in, with what stands in its way", async () => {
    const { path } = await roundTrip();
    expect(await lead.packets.look(path)).toMatchObject({ kind: "return", files: 4, protocolVersion: 1, refusal: null });
    expect((await annotator.packets.look(path)).refusal).toMatch(/does not lead/);
  });
});

describe("an assignment", () => {
  it("is known when it is taken in twice", async () => {
    const path = await packetOut(lead, study, 1);
    const first = await takenIn(annotator, path);
    const before = await diskBelow(ANNOTATOR);
    expect(await takenIn(annotator, path)).toEqual({ ...first, outcome: "known" });
    expect(await diskBelow(ANNOTATOR)).toEqual(before);
  });

  it("is refused by the library that leads its study", async () => {
    const path = await packetOut(lead, study, 1);
    await refused(
      LEAD,
      () => takenIn(lead, path),
      /belongs to a study that this library leads, where names and passes can be seen/,
    );
  });

  it("whose scan travels apart says so until the scan is there", async () => {
    const path = await packetOut(lead, study, 1, { scan: "apart" });
    const { code } = assignmentAt(study, 1);
    await refused(ANNOTATOR, () => takenIn(annotator, path), new RegExp(`take in the packet ${code}-scan first`));
    const scan = path.replace("assignment", "scan");
    expect(await takenIn(annotator, scan)).toMatchObject({ kind: "scan", outcome: "taken", pass: null });
    expect(await takenIn(annotator, scan)).toMatchObject({ outcome: "known" });
    expect(await takenIn(annotator, path)).toMatchObject({
      kind: "assignment",
      outcome: "taken",
      specimen: assignmentAt(study, 1).id,
    });
  });

  it("with a file beside the scan's own, or another scan than it names, is refused", async () => {
    const path = await packetOut(lead, study, 1);
    const more = await repacked(
      path,
      (inside) => {
        inside["data/scan/run.sh"] = "x";
      },
      true,
    );
    await refused(ANNOTATOR, () => takenIn(annotator, more), /files of a stored scan, found 'data\/scan\/run.sh'/);
    const other = await repacked(
      path,
      (inside) => {
        inside["data/scan/specimen.json"] = inside["data/scan/specimen.json"]!.replace(/"sha256": "../, '"sha256": "00');
      },
      true,
    );
    await refused(ANNOTATOR, () => takenIn(annotator, other), /a scan with the SHA-256/);
    const elsewhere = await repacked(
      path,
      (inside) => {
        const record = JSON.parse(inside["data/scan/specimen.json"]!);
        record.volume.inPlace = {
          path: "/etc",
          array: "0",
          metadata: "zarr.json",
          selection: [null, null, null],
          files: 1,
          bytes: 1,
          changed: 1,
        };
        inside["data/scan/specimen.json"] = JSON.stringify(record);
      },
      true,
    );
    await refused(ANNOTATOR, () => takenIn(annotator, elsewhere), /a scan within the packet, found one that lies elsewhere/);
  });

  it("of a newer packet format, or a bag of something else, is refused with its sentence", async () => {
    const path = await packetOut(lead, study, 1);
    const newer = await repacked(
      path,
      (inside) => {
        inside["data/packet.json"] = inside["data/packet.json"]!.replace('"version": 1', '"version": 2');
      },
      true,
    );
    await refused(
      ANNOTATOR,
      () => takenIn(annotator, newer),
      /version\): expected version 1, found version 2. It was made by another version of the program/,
    );
    const something = await repacked(
      path,
      (inside) => {
        for (const name of Object.keys(inside)) delete inside[name];
        inside["data/hello.txt"] = "hello";
      },
      true,
    );
    await refused(
      ANNOTATOR,
      () => takenIn(annotator, something),
      /This is a bag, but not one with an assignment or a pass in it/,
    );
  });

  it("is not made where its name is taken, outside its order, or into the library", async () => {
    await packetOut(lead, study, 1);
    await refused(LEAD, () => packetOut(lead, study, 1), /already something named .*-assignment.zip in this folder/);
    await expect(
      lead.studies.makePackets(study.id, {
        assignments: [assignmentAt(study, 2).id],
        folder: `${LEAD}/specimens`,
        form: "zip",
        scan: "within",
        sign: false,
      }),
    ).rejects.toThrow(/lies in the library/);
    await expect(
      lead.studies.makePackets(study.id, {
        assignments: [assignmentAt(study, 2).id],
        folder: "/none",
        form: "zip",
        scan: "within",
        sign: false,
      }),
    ).rejects.toThrow(/there is no such folder/);
  });

  it("keeps the study from being removed and its annotator from being left out", async () => {
    await packetOut(lead, study, 1);
    await refused(LEAD, () => lead.studies.remove(study.id), /has 1 packet out or returned/);
    await refused(LEAD, () => lead.studies.change(study.id, { annotators: ["AN-2"] }), /is out already/);
    study = await lead.studies.change(study.id, { annotators: ["AN-1", "AN-2"] });
    expect(study.assignments).toHaveLength(4);
  });
});
