import { basename, isAbsolute } from "node:path";
import type { PacketPort } from "#main/http/ports.ts";
import type { Abilities } from "#main/node/abilities.ts";
import { readOrTell } from "#main/node/disk-fault.ts";
import { hideFolders } from "#main/node/hide-folders.ts";
import type { Jobs, JobWork } from "#main/node/jobs.ts";
import { type OpenBag, openBag } from "#main/node/packet/bag-reader.ts";
import type { SigningKey } from "#main/node/packet/signing.ts";
import { makeAssignments, plannedPackets } from "#main/node/study/make-assignment.ts";
import { makeReturn, plannedReturn } from "#main/node/study/make-return.ts";
import { packetOf } from "#main/node/study/packet-parts.ts";
import { assignmentObstacle, type TakeInOptions, takeInAssignment, takeInScan } from "#main/node/study/take-in-assignment.ts";
import { returnTarget, takeInReturn } from "#main/node/study/take-in-return.ts";
import { Turns } from "#main/node/turns.ts";
import type { ServerEvent } from "#shared/api/routes.ts";
import type { AssignmentView, PacketLook, PacketRequest, TakeInRequest, TakenPacket } from "#shared/api/study.ts";
import { isTautlineError, TautlineError } from "#shared/errors.ts";
import type { Packet } from "#shared/study/packet.ts";
import { openEndsOf } from "#shared/study/returned-log.ts";

export interface PacketsOptions extends TakeInOptions {
  readonly key: SigningKey;
  readonly jobs: Jobs;
  readonly runTurned: Abilities["runTurned"];
  readonly emit: (event: ServerEvent) => void;
  readonly softwareVersion: string;
  /** Asks the engine to let go of a specimen that is sealed. */
  readonly forgetSpecimen?: (specimen: string) => Promise<void>;
}

/** Packets in and out, and the assignments that were taken in. */
export function packets(options: PacketsOptions): PacketPort & {
  makePackets(study: string, request: PacketRequest): Promise<{ job: string }>;
} {
  const { library, files, jobs, key, emit } = options;
  // One packet is taken in after the other: two copies of the same one must not meet half-way.
  const turns = new Turns();
  const told = (work: JobWork, path: string): JobWork => {
    return async (report, signal) => {
      try {
        return await work(report, signal);
      } catch (error) {
        throw hideFolders(hideFolders(error, path), library.layout.root);
      } finally {
        emit({ event: "studies" });
      }
    };
  };
  const open = async (path: string): Promise<OpenBag> => {
    if (!isAbsolute(path)) {
      const what = "a whole path was expected";
      throw new TautlineError("bad-request", `The packet cannot be opened: ${what}.`, { what, where: "body.path" });
    }
    return openBag(files, path).catch((error) => {
      throw hideFolders(systemFault(error, path), path);
    });
  };

  return {
    async makePackets(study, request) {
      await plannedPackets(options, study, request);
      const work: JobWork = async (onProgress, signal) => ({
        packets: await makeAssignments(options, study, request, { onProgress, signal }),
      });
      return jobs.start("packets", told(work, request.folder));
    },
    async look(path) {
      const bag = await open(path);
      return lookOf(options, bag, await packetOf(bag));
    },
    async takeIn(request) {
      const bag = await open(request.path);
      await packetOf(bag);
      const work: JobWork = (report, signal) =>
        turns.take(async () => {
          const whole = [...bag.payload.values()].reduce((sum, bytes) => sum + bytes, 1);
          const onBytes = (bytes: number) =>
            report({ progress: bytes / whole, step: `Taking in ${bag.name}`, bytesPerSecond: null, secondsLeft: null });
          // Opened anew: it may have changed while other packets were taken in.
          const taken = await take(options, await openBag(files, request.path), request, { signal, onBytes });
          emit({ event: "shelf" });
          return { specimen: taken.specimen, taken };
        });
      return jobs.start("take-in", told(work, request.path));
    },
    signature: async () => ({ fingerprint: await key.fingerprint() }),
    assignment: (specimen) => viewOf(options, specimen),
    async assignmentPicture(specimen, picture) {
      await library.assignments.read(specimen);
      const bytes = await readOrTell(files, library.layout.assignmentPicture(specimen, picture), "the picture");
      if (!bytes)
        throw new TautlineError("not-found", "There is no such picture in the assignment.", { what: "picture", id: picture });
      return bytes;
    },
    async makeReturn(specimen, request) {
      await plannedReturn(options, specimen, request);
      const work: JobWork = async (onProgress, signal) => {
        const made = await makeReturn(options, specimen, request, { onProgress, signal });
        await options.forgetSpecimen?.(specimen);
        emit({ event: "shelf" });
        return { packets: [made] };
      };
      return jobs.start("return", told(work, request.folder));
    },
    async reopen(specimen) {
      const record = await library.assignments.read(specimen);
      if (record.returned?.sealed) {
        await library.assignments.write({ ...record, returned: { ...record.returned, sealed: false } });
        await library.setPassState(specimen, record.pass, "under-way");
      }
      emit({ event: "shelf" });
      emit({ event: "studies" });
      return viewOf(options, specimen);
    },
  };
}

async function take(
  options: PacketsOptions,
  bag: OpenBag,
  request: TakeInRequest,
  hooks: { readonly signal: AbortSignal; onBytes(bytes: number): void },
): Promise<TakenPacket> {
  const packet = await packetOf(bag);
  switch (packet.kind) {
    case "scan":
      return takeInScan(options, bag, packet, hooks);
    case "assignment":
      return takeInAssignment(options, bag, packet, hooks);
    case "return":
      return takeInReturn(options, bag, packet, request.allowOpenEnds === true);
  }
}

async function lookOf(options: PacketsOptions, bag: OpenBag, packet: Packet): Promise<PacketLook> {
  const refusal = await refusalOf(options, packet);
  return {
    kind: packet.kind,
    code: packet.code,
    study: packet.study,
    protocolVersion: packet.kind === "scan" ? null : packet.protocol.version,
    files: bag.payload.size,
    bytes: [...bag.payload.values()].reduce((sum, bytes) => sum + bytes, 0),
    fingerprint: bag.fingerprint,
    meaning: MEANINGS[packet.kind],
    refusal,
  };
}

const MEANINGS: Readonly<Record<Packet["kind"], string>> = {
  scan: "The scan of an assignment: it will stand on the shelf under its code.",
  assignment: "An assignment: its scan and one empty pass will stand on the shelf under its code.",
  return: "A returned pass: it will stand with its specimen, in the specimen's own frame.",
};

async function refusalOf(options: PacketsOptions, packet: Packet): Promise<string | null> {
  if (packet.kind !== "return") return (await assignmentObstacle(options, packet))?.message ?? null;
  return returnTarget(options, packet).then(
    () => null,
    (error) => {
      if (isTautlineError(error)) return error.message;
      throw error;
    },
  );
}

async function viewOf({ library }: PacketsOptions, specimen: string): Promise<AssignmentView> {
  const record = await library.assignments.read(specimen);
  const { document } = await library.passes.history(specimen, record.pass);
  const { returned } = record;
  return {
    ...(await library.assignments.summary(record)),
    training: record.training,
    rules: record.rules,
    protocolVersion: record.protocol.version,
    from: record.from,
    openEnds: openEndsOf(document),
    returned: returned && { at: returned.at, files: returned.files.map((path) => basename(path)) },
  };
}

/** The typed error where the system refused to read a packet; others as they are. */
function systemFault(error: unknown, path: string): unknown {
  const { code } = (error ?? {}) as { code?: unknown };
  if (isTautlineError(error) || typeof code !== "string") return error;
  const [file, expected, found] = [basename(path), "a packet that can be read", `that the system refuses (${code})`];
  return new TautlineError(
    "unreadable-input",
    `${file}: expected ${expected}, found ${found}.`,
    { file, expected, found },
    error,
  );
}
