import type { LogSender } from "#renderer/storage/log-sender.ts";
import type { AppendAnswer, AppendRequest, LogAnswer } from "#shared/api/routes.ts";
import type { PassSummary } from "#shared/api/specimen.ts";
import { TautlineError } from "#shared/errors.ts";
import { hashOfLine } from "#shared/log/line.ts";

/** A journal on disk as the window sees it, in memory: the same answers, and failures on demand. */
export class FakeJournal implements LogSender {
  lines: string[];
  epoch: string;
  branches: { name: string; lines: readonly string[] }[] = [];
  /** Errors for the next requests, one each; null lets one through. */
  failures: (unknown | null)[] = [];
  /** The next append is carried out, but its answer is lost. */
  loseAnswer = false;
  /** The library has lost the pass. */
  gone = false;
  appends = 0;
  private underWay = 0;
  greatestUnderWay = 0;

  constructor(epoch: string, lines: readonly string[]) {
    this.epoch = epoch;
    this.lines = [...lines];
  }

  async readLog(from: number): Promise<LogAnswer> {
    await this.arrive();
    if (this.gone) throw new TautlineError("not-found", "no such pass", { what: "pass", id: "p" });
    if (from > this.lines.length)
      throw new TautlineError("bad-request", "the log ends before", { what: "from", where: "query.from" });
    return {
      epoch: this.epoch,
      lines: this.lines.slice(from),
      head: this.head(),
      before: from === 0 ? "" : hashOfLine(this.lines[from - 1]!),
    };
  }

  async appendLog(request: Omit<AppendRequest, "window">): Promise<AppendAnswer> {
    this.underWay += 1;
    this.greatestUnderWay = Math.max(this.greatestUnderWay, this.underWay);
    try {
      await this.arrive();
      this.appends += 1;
      const { base, epoch, lines } = request;
      const line = this.lines[base.seq];
      const fits =
        epoch === this.epoch && (base.seq === -1 ? base.hash === "" : line !== undefined && hashOfLine(line) === base.hash);
      if (!fits) throw conflict();
      const known = this.lines.slice(base.seq + 1);
      if (known.slice(0, lines.length).some((have, i) => have !== lines[i])) throw conflict();
      const fresh = lines.slice(known.length);
      this.lines.push(...fresh);
      if (this.loseAnswer) {
        this.loseAnswer = false;
        throw new TypeError("Failed to fetch");
      }
      return { outcome: fresh.length === 0 ? "known" : "appended", head: this.head() };
    } finally {
      this.underWay -= 1;
    }
  }

  async keepBranch(lines: readonly string[], name: string): Promise<PassSummary> {
    await this.arrive();
    this.branches.push({ name, lines: [...lines] });
    return { id: `b${this.branches.length}` } as PassSummary;
  }

  async rebuildLog(lines: readonly string[]): Promise<AppendAnswer> {
    await this.arrive();
    this.gone = false;
    this.lines = [...lines];
    return { outcome: "appended", head: this.head() };
  }

  private head() {
    return { seq: this.lines.length - 1, hash: hashOfLine(this.lines[this.lines.length - 1]!) };
  }

  private async arrive(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve, 0));
    const failure = this.failures.shift() ?? null;
    if (failure !== null) throw failure;
  }
}

function conflict(): TautlineError<"conflict"> {
  return new TautlineError("conflict", "the logs fork", { what: "log", expected: "the journal's end", found: "another" });
}
