import type { PacketPort } from "#main/http/ports.ts";
import type { AssignmentStore } from "#main/node/study/assignment-store.ts";
import type { PacketRequest } from "#shared/api/study.ts";
import { TautlineError } from "#shared/errors.ts";

export interface PacketsOptions {
  readonly assignments: AssignmentStore;
}

/** Packets in and out, and the assignments that were taken in. */
export function packets(_options: PacketsOptions): PacketPort & {
  makePackets(study: string, request: PacketRequest): Promise<{ job: string }>;
} {
  const absent = async (): Promise<never> => {
    throw new TautlineError("internal", "Packets are being built.", { what: "packets" });
  };
  return {
    makePackets: absent,
    look: absent,
    takeIn: absent,
    signature: absent,
    assignment: absent,
    assignmentPicture: absent,
    makeReturn: absent,
    reopen: absent,
  };
}
