import { createHash } from "node:crypto";
import { isAbsolute } from "node:path";
import type { StudyPort } from "#main/http/ports.ts";
import type { FilePort } from "#main/node/file-port.ts";
import type { RandomBytes } from "#main/node/layout.ts";
import { createId } from "#main/node/layout.ts";
import type { Library } from "#main/node/library.ts";
import type { AssignmentStore } from "#main/node/study/assignment-store.ts";
import { exportStudyPasses } from "#main/node/study/export-passes.ts";
import { keptPng } from "#main/node/study/kept-png.ts";
import { studyFiles } from "#main/node/study/study-files.ts";
import type { StudyStore } from "#main/node/study/study-store.ts";
import type { ServerEvent } from "#shared/api/routes.ts";
import type { PacketRequest, StudyView } from "#shared/api/study.ts";
import { isTautlineError, TautlineError } from "#shared/errors.ts";
import { counted } from "#shared/study/count-words.ts";
import {
  changedStudy,
  frozenStudy,
  newStudy,
  noted,
  revisedStudy,
  type StudySpecimenFacts,
  withProtocol,
} from "#shared/study/edit-study.ts";
import type { StudyRecord } from "#shared/study/study-record.ts";
import { analysisAnswer, studySummary, studyView } from "#shared/study/study-view.ts";

export interface StudiesOptions {
  readonly library: Library;
  readonly files: FilePort;
  readonly store: StudyStore;
  readonly assignments: AssignmentStore;
  readonly random: RandomBytes;
  /** UTC milliseconds. */
  readonly now: () => number;
  readonly emit: (event: ServerEvent) => void;
  readonly softwareVersion: string;
  readonly makePackets: (study: string, request: PacketRequest) => Promise<{ job: string }>;
}

/** The studies that a library leads, behind their routes. */
export function studies(options: StudiesOptions): StudyPort {
  const { library, files, store, assignments, random, now, emit } = options;

  const view = async (study: StudyRecord): Promise<StudyView> => {
    const problems = await specimenProblems(library, study);
    return studyView(study, (id) => problems.get(id) ?? null, now());
  };
  const change = async (id: string, work: (study: StudyRecord) => StudyRecord | Promise<StudyRecord>) => {
    const study = await store.change(id, work);
    emit({ event: "studies" });
    return view(study);
  };
  const factsOf = async (ids: readonly string[]) => {
    const facts = new Map<string, StudySpecimenFacts>();
    for (const id of ids) {
      const { name, volume } = await library.specimen(id);
      if (await assignments.find(id)) {
        const what = `${name} is an assignment, not a specimen of this library: it cannot be in a study led from here`;
        throw new TautlineError("bad-request", `${what}.`, { what, where: "body.specimens" });
      }
      const { size, spacing, origin, direction, frame } = volume;
      facts.set(id, { name, sha256: volume.sha256, grid: { size, spacing, origin, direction, frame } });
    }
    return (id: string) => facts.get(id)!;
  };

  return {
    async studies() {
      const led = await store.all();
      const taken = await assignments.all();
      return {
        studies: led.studies.map(studySummary),
        assignments: taken.assignments,
        problems: [...led.problems, ...taken.problems],
      };
    },
    async create(draft) {
      const facts = await factsOf([...draft.specimens, ...draft.training]);
      const seed = Buffer.from(random(32)).toString("hex");
      const study = newStudy(draft, facts, { id: createId(random), seed, now: now() });
      await store.create(study);
      emit({ event: "studies" });
      return view(study);
    },
    study: async (id) => view(await store.read(id)),
    change: (id, patch) =>
      change(id, async (study) => {
        const own = (training: boolean) => study.specimens.filter((one) => one.training === training).map(({ id: one }) => one);
        const facts = await factsOf([...(patch.specimens ?? own(false)), ...(patch.training ?? own(true))]);
        return changedStudy(study, patch, facts, now());
      }),
    async remove(id) {
      await store.remove(id, (study) => {
        const out = study.assignments.filter((one) => one.out || one.returned || one.setAside.length > 0).length;
        if (out === 0) return;
        const what = `study with ${counted(out, "packet")} out or returned`;
        throw new TautlineError(
          "conflict",
          `The study has ${counted(out, "packet")} out or returned; without it none could be taken in.`,
          {
            what,
            expected: "no packet made",
            found: `${out}`,
          },
        );
      });
      emit({ event: "studies" });
    },
    changeProtocol: (id, { content }) =>
      change(id, async (study) => {
        for (const { picture } of content.drawing.points) if (picture !== null) await store.picture(id, picture);
        return withProtocol(study, content);
      }),
    freezeProtocol: (id) =>
      change(id, async (study) => frozenStudy(study, await factsOf(study.specimens.map((one) => one.id)), now())),
    reviseProtocol: (id, { reason }) => change(id, (study) => revisedStudy(study, reason, now())),
    async addPicture(id, bytes) {
      const kept = keptPng(bytes);
      const picture = createHash("sha256").update(kept).digest("hex");
      await store.writePicture(id, picture, kept);
      return { picture };
    },
    picture: (id, picture) => store.picture(id, picture),
    makePackets: options.makePackets,
    setAside: (id, assignment, { reason }) =>
      change(id, (study) => {
        const one = study.assignments.find((other) => other.id === assignment);
        if (!one?.returned) {
          const what = "returned pass of this assignment";
          throw new TautlineError("not-found", `There is no ${what}.`, { what, id: assignment });
        }
        const aside = [...one.setAside, { ...one.returned, reason, setAsideAt: now() }];
        const changed = { ...one, returned: null, setAside: aside };
        const text = `${one.annotator}'s pass ${one.pass} (${one.code}) was set aside: ${reason}`;
        const list = study.assignments.map((other) => (other === one ? changed : other));
        return noted({ ...study, assignments: list }, { at: now(), what: "set-aside", text });
      }),
    analysis: async (id) => analysisAnswer(await store.read(id)),
    passes: async (id) => ({ files: await studyFiles(library, await store.read(id), options.softwareVersion) }),
    async exportPasses(id, { folder }) {
      if (!isAbsolute(folder)) {
        const what = "a whole path was expected";
        throw new TautlineError("bad-request", `The passes cannot be written: ${what}.`, { what, where: "body.folder" });
      }
      return exportStudyPasses({ ...options, study: await store.read(id), folder, files });
    },
  };
}

/** Sentences on specimens that are missing or have become others, by id. */
async function specimenProblems(library: Library, study: StudyRecord): Promise<Map<string, string>> {
  const problems = new Map<string, string>();
  for (const { id, name, sha256 } of study.specimens) {
    await library.specimen(id).then(
      ({ volume }) => {
        if (volume.sha256 !== sha256) problems.set(id, `${name} is another scan than when it was put into the study.`);
      },
      (error) => {
        if (!isTautlineError(error)) throw error;
        problems.set(id, error.tag === "not-found" ? `${name} is not in this library any more.` : error.message);
      },
    );
  }
  return problems;
}
