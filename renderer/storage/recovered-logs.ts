import type { LogSender } from "#renderer/storage/log-sender.ts";
import type { PassStore } from "#renderer/storage/pass-store.ts";
import type { RecoveredLog } from "#renderer/storage/window-database.ts";
import type { PassSummary } from "#shared/api/specimen.ts";
import { TautlineError } from "#shared/errors.ts";

/** Edits set aside in this browser, as the person is shown them. */
export interface RecoveredEdits {
  readonly id: number;
  readonly name: string;
  /** When they were set aside, UTC milliseconds. */
  readonly t: number;
  /** What a person made or chose among the records set aside, never 0; others are not worth a question. */
  readonly edits: number;
  /** False when the records before them are not known any more: alone they are no pass. */
  readonly isWhole: boolean;
}

/** The logs of one pass that this browser set aside, and what can be done with them. */
export class RecoveredLogs {
  constructor(
    private readonly store: PassStore,
    private readonly sender: LogSender,
  ) {}

  /** Oldest first. */
  async list(): Promise<RecoveredEdits[]> {
    const logs = await this.store.recovered();
    return logs
      .map((log) => ({
        id: log.id!,
        name: log.name,
        t: log.t,
        edits: editsAmong(log.lines),
        isWhole: seqOf(wholeOf(log)[0]) === 0,
      }))
      .filter(({ edits }) => edits > 0);
  }

  /** Makes a pass of its own in the library of the log, and only then drops it here. @throws not-found, or what the sender throws */
  async keepAsPass(id: number): Promise<PassSummary> {
    const log = (await this.store.recovered()).find((one) => one.id === id);
    if (log === undefined) {
      throw new TautlineError("not-found", "These edits are not kept in this browser any more.", {
        what: "recovered edits",
        id: String(id),
      });
    }
    const pass = await this.sender.keepBranch(wholeOf(log), log.name);
    await this.store.dropRecovered(id);
    return pass;
  }

  /** Forgets a log for good. */
  forget(id: number): Promise<void> {
    return this.store.dropRecovered(id);
  }
}

/** Number of records that a person made or chose: edits, moves of the history, marks. */
export function editsAmong(lines: readonly string[]): number {
  return lines.filter((line) => ["op", "at", "mark"].includes(kindOf(line))).length;
}

function wholeOf({ before, lines }: RecoveredLog): readonly string[] {
  return [...(before ?? []), ...lines];
}

function kindOf(line: string): string {
  return (JSON.parse(line) as { kind: string }).kind;
}

function seqOf(line: string | undefined): number | null {
  return line === undefined ? null : (JSON.parse(line) as { seq: number }).seq;
}
