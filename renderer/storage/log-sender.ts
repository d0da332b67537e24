import type { AppendAnswer, AppendRequest, LogAnswer } from "#shared/api/routes.ts";
import type { PassSummary } from "#shared/api/specimen.ts";

/** The requests about one pass's journal that storage needs; given by whoever holds the client. Failures are tagged errors. */
export interface LogSender {
  readLog(from: number): Promise<LogAnswer>;
  /** Resolves when the lines are on disk and synced. */
  appendLog(request: Omit<AppendRequest, "window">): Promise<AppendAnswer>;
  keepBranch(lines: readonly string[], name: string): Promise<PassSummary>;
  rebuildLog(lines: readonly string[]): Promise<AppendAnswer>;
}
