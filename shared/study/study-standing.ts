import type { ProtocolVersion } from "#shared/study/protocol.ts";
import { sameDrawing } from "#shared/study/protocol-change.ts";
import type { Assignment, StudyRecord } from "#shared/study/study-record.ts";

/** Milliseconds of a day. */
export const DAY_MS = 86_400_000;

/** The newest version of the protocol, frozen or not. */
export function currentProtocol({ protocols }: StudyRecord): ProtocolVersion {
  return protocols[protocols.length - 1]!;
}

/** Why a packet cannot be made now. */
export interface PacketObstacle {
  /** One sentence. */
  readonly why: string;
  /** Only the days between repeats stand in the way. */
  readonly waivable: boolean;
}

/**
 * UTC milliseconds from which an assignment may go out: the days of the protocol after the same annotator's pass before over
 * the same specimen came back, by the lead's clock alone. Null when there is no pass before, or it has not come back.
 */
export function earliestOut(study: StudyRecord, assignment: Assignment): number | null {
  const before = passBefore(study, assignment);
  if (!before?.returned) return null;
  return before.returned.at + currentProtocol(study).content.schedule.washoutDays * DAY_MS;
}

/**
 * What keeps an assignment's packet from being made; null when nothing does.
 * @param alongWith ids of assignments whose packets are made in the same go. @param now UTC milliseconds.
 */
export function packetObstacle(
  study: StudyRecord,
  assignment: Assignment,
  now: number,
  alongWith: ReadonlySet<string> = new Set(),
): PacketObstacle | null {
  const fixed = (why: string): PacketObstacle => ({ why, waivable: false });
  const { version, frozen } = currentProtocol(study);
  if (!frozen) return fixed(`Version ${version} of the protocol is not frozen: assignments go out under a frozen protocol only.`);
  if (assignment.returned) return fixed("Its pass has been taken in.");
  const earlier = study.assignments.find(
    (one) =>
      one.annotator === assignment.annotator &&
      one.place < assignment.place &&
      !one.out &&
      !one.returned &&
      !alongWith.has(one.id),
  );
  if (earlier) return fixed(`${earlier.code} comes before it in the order drawn for ${assignment.annotator}.`);
  const before = passBefore(study, assignment);
  if (!before) return null;
  if (!before.returned)
    return fixed(`${assignment.annotator}'s pass ${before.pass} over the same specimen has not come back yet.`);
  const left = Math.ceil((earliestOut(study, assignment)! - now) / DAY_MS);
  if (left <= 0) return null;
  const days = currentProtocol(study).content.schedule.washoutDays;
  return { why: `Of the ${days} days between repeats, ${left} ${left === 1 ? "is" : "are"} still to pass.`, waivable: true };
}

/** Whether a returned pass takes part in the analysis, and if not why; null while there is none. */
export function passCounts(
  study: StudyRecord,
  { training, returned }: Assignment,
): { readonly yes: boolean; readonly reason: string | null } | null {
  if (!returned) return null;
  if (training) return { yes: false, reason: "The training round does not count." };
  const drawn = study.protocols.find(({ version }) => version === returned.protocolVersion);
  const current = currentProtocol(study);
  if (!drawn || !sameDrawing(drawn.content, current.content)) {
    const reason = `It was drawn under version ${returned.protocolVersion} of the protocol, whose rules for drawing differ from version ${current.version}'s.`;
    return { yes: false, reason };
  }
  return { yes: true, reason: null };
}

function passBefore(study: StudyRecord, { annotator, specimen, pass }: Assignment): Assignment | undefined {
  return study.assignments.find((one) => one.annotator === annotator && one.specimen === specimen && one.pass === pass - 1);
}
