import type { PacketPort, StudyPort } from "#main/http/ports.ts";
import type { Abilities } from "#main/node/abilities.ts";
import type { FilePort } from "#main/node/file-port.ts";
import type { Jobs } from "#main/node/jobs.ts";
import type { WriterCheck } from "#main/node/journal.ts";
import type { RandomBytes } from "#main/node/layout.ts";
import { createId } from "#main/node/layout.ts";
import type { Library } from "#main/node/library.ts";
import { SigningKey } from "#main/node/packet/signing.ts";
import { packets } from "#main/node/study/packets.ts";
import { studies } from "#main/node/study/studies.ts";
import { StudyStore } from "#main/node/study/study-store.ts";
import type { ServerEvent } from "#shared/api/routes.ts";

export interface StudyPortsOptions {
  readonly library: Library;
  readonly files: FilePort;
  readonly jobs: Jobs;
  readonly abilities: Pick<Abilities, "runTurned" | "forgetSpecimen">;
  readonly random: RandomBytes;
  /** UTC milliseconds. */
  readonly now: () => number;
  readonly mayWrite: WriterCheck;
  readonly emit: (event: ServerEvent) => void;
  readonly softwareVersion: string;
}

/** Studies, assignments and packets over one library. */
export function studyPorts(options: StudyPortsOptions): {
  readonly studies: StudyPort;
  readonly packets: PacketPort;
  readonly store: StudyStore;
} {
  const { library, files, mayWrite, random, abilities } = options;
  const store = new StudyStore({ files, layout: library.layout, mayWrite });
  const port = packets({
    ...options,
    store,
    key: new SigningKey(files, library.layout.signingKey, mayWrite),
    newId: () => createId(random),
    runTurned: abilities.runTurned,
    forgetSpecimen: async (specimen) => abilities.forgetSpecimen?.(specimen),
  });
  return {
    studies: studies({ ...options, store, assignments: library.assignments, makePackets: port.makePackets }),
    packets: port,
    store,
  };
}
