import { basename } from "node:path";
import { readOrTell, writeFault } from "#main/node/disk-fault.ts";
import type { AppendFile, FilePort } from "#main/node/file-port.ts";
import { Turns } from "#main/node/turns.ts";
import { writeWhole } from "#main/node/whole-file.ts";
import type { AppendAnswer, AppendRequest, LogAnswer } from "#shared/api/routes.ts";
import { isTautlineError, TautlineError, unreadable } from "#shared/errors.ts";
import { readChain, splitLog } from "#shared/log/chain.ts";
import { hashOfLine } from "#shared/log/line.ts";
import type { LogHead, LogHeader } from "#shared/log/records.ts";

/** Called before every append; throws `held-elsewhere` when this process may not write any more. */
export type WriterCheck = () => Promise<void>;

/** What is known of a journal on disk: where each line ends and its hash. `size` counts whole, chained lines only. */
interface Known {
  readonly header: LogHeader;
  /** Byte offset just after each line's newline. */
  readonly ends: number[];
  readonly hashes: string[];
  /** A torn last line follows `size`; it is cut off before the next append. */
  torn: boolean;
}

/**
 * The journal of one pass: a file of chained lines that grows at its end. Appends and reads take turns. After any failure to
 * write, the file is cut back to what was acknowledged before anything else is appended.
 */
export class Journal {
  readonly #files: FilePort;
  readonly #path: string;
  readonly #mayWrite: WriterCheck;
  readonly #known: Known;
  readonly #turns = new Turns();
  #file: AppendFile | null = null;

  private constructor(files: FilePort, path: string, mayWrite: WriterCheck, known: Known) {
    this.#files = files;
    this.#path = path;
    this.#mayWrite = mayWrite;
    this.#known = known;
  }

  /** Writes a new journal whole. There must be none yet. @throws conflict, disk-full, write-failed, unreadable-input */
  static async create(files: FilePort, path: string, lines: readonly string[], mayWrite: WriterCheck): Promise<Journal> {
    await mayWrite();
    if ((await files.read(path, 0, 0)) !== undefined) {
      throw new TautlineError("conflict", "The pass has a journal already; it stays as it is.", {
        what: "journal",
        expected: "none",
        found: "a journal",
      });
    }
    const bytes = encodeLines(lines);
    const known = scan(basename(path), bytes);
    await writeWhole(files, path, bytes);
    files.reach("journal:after-create");
    return new Journal(files, path, mayWrite, known);
  }

  /** Opens the journal and checks its chain; undefined when there is none. @throws unreadable-input where the chain is broken. */
  static async open(files: FilePort, path: string, mayWrite: WriterCheck): Promise<Journal | undefined> {
    const bytes = await readOrTell(files, path, basename(path));
    return bytes && new Journal(files, path, mayWrite, scan(basename(path), bytes));
  }

  get header(): LogHeader {
    return this.#known.header;
  }

  get head(): LogHead {
    return headOf(this.#known);
  }

  /** Hash of the line `seq`; undefined when the log does not reach that far. */
  hashAt(seq: number): string | undefined {
    return this.#known.hashes[seq];
  }

  /** Lines from seq `from` on. @throws bad-request when the log does not reach that far. */
  read(from: number): Promise<LogAnswer> {
    return this.#turns.take(async () => {
      const { ends, hashes, header } = this.#known;
      if (from > ends.length) {
        const what = `the log ends at seq ${ends.length - 1}`;
        throw new TautlineError("bad-request", `Lines from seq ${from} were asked for, but ${what}.`, {
          what,
          where: "query.from",
        });
      }
      const start = from === 0 ? 0 : ends[from - 1]!;
      const size = ends[ends.length - 1]!;
      const bytes = (await readOrTell(this.#files, this.#path, basename(this.#path), start, size)) ?? new Uint8Array(0);
      if (bytes.length !== size - start) {
        throw unreadable(
          basename(this.#path),
          `${size} bytes`,
          `${start + bytes.length}`,
          undefined,
          "The file was changed outside.",
        );
      }
      const lines = new TextDecoder().decode(bytes).split("\n").slice(0, -1);
      return { epoch: header.epoch, lines, head: headOf(this.#known), before: from === 0 ? "" : hashes[from - 1]! };
    });
  }

  /**
   * Appends lines that continue the chain from the request's base; resolves once they are on disk and synced. Lines that
   * are there already are `known`. @throws conflict when the logs fork, disk-full, write-failed, held-elsewhere, unreadable-input
   */
  append(request: Pick<AppendRequest, "epoch" | "base" | "lines">): Promise<AppendAnswer> {
    return this.#turns.take(async () => {
      const fresh = this.#freshLines(request);
      if (fresh.length === 0) return { outcome: "known", head: this.head };
      const chained = readChain(fresh, this.head, "The lines sent");
      await this.#mayWrite();
      await this.#write(encodeLines(fresh));
      let end = this.#size();
      for (const [i, { hash }] of chained.entries()) {
        end += Buffer.byteLength(fresh[i]!) + 1;
        this.#known.ends.push(end);
        this.#known.hashes.push(hash);
      }
      return { outcome: "appended", head: this.head };
    });
  }

  async close(): Promise<void> {
    await this.#turns.take(() => this.#drop());
  }

  /** The lines of a request that are not on disk yet. @throws conflict */
  #freshLines({ epoch, base, lines }: Pick<AppendRequest, "epoch" | "base" | "lines">): readonly string[] {
    const { header, hashes } = this.#known;
    if (epoch !== header.epoch) throw forked("epoch", header.epoch, epoch);
    const have = hashes[base.seq];
    if (have === undefined) throw forked("base", `seq ${hashes.length - 1} at most`, `seq ${base.seq}`);
    if (have !== base.hash) throw forked("base", `${have} at seq ${base.seq}`, base.hash);
    const overlap = Math.min(lines.length, hashes.length - 1 - base.seq);
    for (let i = 0; i < overlap; i += 1) {
      const hash = hashOfLine(lines[i]!);
      if (hash !== hashes[base.seq + 1 + i]) throw forked("line", `${hashes[base.seq + 1 + i]} at seq ${base.seq + 1 + i}`, hash);
    }
    return lines.slice(overlap);
  }

  async #write(bytes: Uint8Array): Promise<void> {
    const size = this.#size();
    try {
      if (this.#known.torn) await this.#cutTail(size);
      this.#file ??= await this.#files.openAppend(this.#path);
      this.#files.reach("journal:before-append");
      // Until the sync has succeeded, the file holds bytes that nobody was promised.
      this.#known.torn = true;
      await this.#file.append(bytes);
      this.#files.reach("journal:after-append");
      await this.#file.sync();
      this.#known.torn = false;
      this.#files.reach("journal:after-sync");
    } catch (error) {
      const fault = await writeFault(this.#files, this.#path, error, bytes.length);
      if (!isTautlineError(fault)) throw fault;
      // The tail stays marked as torn when it cannot be cut now; the next append tries again first.
      await this.#cutTail(size).catch(() => undefined);
      await this.#drop();
      throw fault;
    }
  }

  async #cutTail(size: number): Promise<void> {
    this.#files.reach("journal:before-tail-drop");
    this.#file ??= await this.#files.openAppend(this.#path);
    await this.#file.truncate(size);
    await this.#file.sync();
    this.#files.reach("journal:after-tail-drop");
    this.#known.torn = false;
  }

  async #drop(): Promise<void> {
    const file = this.#file;
    this.#file = null;
    await file?.close().catch(() => undefined);
  }

  #size(): number {
    return this.#known.ends[this.#known.ends.length - 1]!;
  }
}

function headOf({ hashes }: Known): LogHead {
  return { seq: hashes.length - 1, hash: hashes[hashes.length - 1]! };
}

function encodeLines(lines: readonly string[]): Uint8Array {
  return new TextEncoder().encode(`${lines.join("\n")}\n`);
}

/** Checks the whole chain; a torn last line is left out and marked. @throws unreadable-input */
function scan(file: string, bytes: Uint8Array): Known {
  const { lines, torn } = splitLog(new TextDecoder().decode(bytes));
  const chained = readChain(lines, undefined, file);
  const first = chained[0]?.record;
  if (first?.kind !== "header")
    throw unreadable(file, "a header line", bytes.length === 0 ? "an empty file" : "a torn line", "line 1");
  let end = 0;
  const ends = lines.map((line) => {
    end += Buffer.byteLength(line) + 1;
    return end;
  });
  return { header: first.body, ends, hashes: chained.map(({ hash }) => hash), torn: torn !== null };
}

function forked(what: string, expected: string, found: string): TautlineError<"conflict"> {
  return new TautlineError(
    "conflict",
    "The log in the library and the one sent went different ways. Both are kept: choose which to go on with.",
    { what, expected, found },
  );
}
