import { sep } from "node:path";
import { makeFolder } from "#main/node/disk-fault.ts";
import type { FilePort } from "#main/node/file-port.ts";
import { Journal, type WriterCheck } from "#main/node/journal.ts";
import { createId, type LibraryLayout, type RandomBytes } from "#main/node/layout.ts";
import { NEW_PASS, type PassFile, readPassFile } from "#main/node/pass-file.ts";
import { PassFolds } from "#main/node/pass-folds.ts";
import { summarise } from "#main/node/pass-summary.ts";
import { writeJson } from "#main/node/whole-file.ts";
import type { AppendAnswer, AppendRequest } from "#shared/api/routes.ts";
import type { PassSummary } from "#shared/api/specimen.ts";
import { isTautlineError, TautlineError } from "#shared/errors.ts";
import { readChain } from "#shared/log/chain.ts";
import { PassHistory } from "#shared/log/history.ts";
import { hashOfLine, lineOf } from "#shared/log/line.ts";
import { LOG_FORMAT, LOG_VERSION, type LogHeader, type LogRecord } from "#shared/log/records.ts";
import type { Curve } from "#shared/trees/document.ts";
import type { Operation } from "#shared/trees/operations.ts";

export interface PassStoreOptions {
  readonly files: FilePort;
  readonly layout: LibraryLayout;
  readonly random: RandomBytes;
  /** UTC milliseconds. */
  readonly now: () => number;
  readonly mayWrite: WriterCheck;
}

/** An edit that a pass begins with. */
export interface FirstEdit {
  readonly operation: Operation;
  readonly label: string;
  readonly curves: readonly Curve[];
}

/** A pass that comes from another library. */
export interface TakenInPass {
  readonly specimen: string;
  readonly pass: string;
  readonly annotator: string;
  /** A whole log, header first. */
  readonly records: readonly LogRecord[];
}

/** The passes of a library: their journals, opened once and kept, and what is said beside them. */
export class PassStore {
  readonly #options: PassStoreOptions;
  readonly #journals = new Map<string, Promise<Journal>>();
  readonly #folds: PassFolds;
  /** Whether a pass came back from an annotator, by the path of its file; asked for with every edit. */
  readonly #returned = new Map<string, boolean>();
  readonly #summaries = new Map<string, { key: string; summary: PassSummary }>();

  constructor(options: PassStoreOptions) {
    this.#options = options;
    this.#folds = new PassFolds(options.files);
  }

  /** The pass's journal. @throws not-found, unreadable-input */
  async journal(specimen: string, pass: string): Promise<Journal> {
    const { files, layout, mayWrite } = this.#options;
    const path = layout.journal(specimen, pass);
    const opened = this.#journals.get(path) ?? this.#open(path, () => Journal.open(files, path, mayWrite), pass);
    return opened;
  }

  /** Ids of a specimen's passes. */
  async ids(specimen: string): Promise<string[]> {
    const entries = (await this.#options.files.list(this.#options.layout.passes(specimen))) ?? [];
    return entries.filter(({ folder }) => folder).map(({ name }) => name);
  }

  /** The pass as the shelf lists it; kept until its journal or its state changes. @throws not-found, unreadable-input */
  async summary(specimen: string, pass: string): Promise<PassSummary> {
    const { files, layout } = this.#options;
    const journal = await this.journal(specimen, pass);
    const file = await readPassFile(files, layout.passFile(specimen, pass));
    const key = `${journal.head.hash} ${JSON.stringify(file)}`;
    const kept = this.#summaries.get(`${specimen}/${pass}`);
    if (kept?.key === key) return kept.summary;
    const summary = summarise(await this.#folds.history(layout.pass(specimen, pass), journal), file);
    this.#summaries.set(`${specimen}/${pass}`, { key, summary });
    return summary;
  }

  /** The history of a pass as it stands on disk. @throws not-found, unreadable-input */
  async history(specimen: string, pass: string): Promise<PassHistory> {
    return this.#folds.history(this.#options.layout.pass(specimen, pass), await this.journal(specimen, pass));
  }

  /** @throws conflict for a pass that came back from an annotator */
  async refuseReturned(specimen: string, pass: string): Promise<void> {
    const { files, layout } = this.#options;
    const path = layout.passFile(specimen, pass);
    const isReturned = this.#returned.get(path) ?? (await readPassFile(files, path)).returned !== undefined;
    this.#returned.set(path, isReturned);
    if (!isReturned) return;
    throw new TautlineError("conflict", "This pass came back from an annotator of a study and stays as it was handed over.", {
      what: "pass",
      expected: "a pass of this library",
      found: "a returned pass",
    });
  }

  /** Appends to a pass's journal; see {@link Journal.append}. A snapshot follows when one is due. */
  async append(specimen: string, pass: string, request: AppendRequest): Promise<AppendAnswer> {
    const journal = await this.journal(specimen, pass);
    const answer = await journal.append(request);
    // Not awaited: the window shows "saved" once the journal is synced.
    void this.#folds.snapshot(this.#options.layout.pass(specimen, pass), journal);
    return answer;
  }

  /** A new pass with nothing but its header. */
  async create(specimen: string, annotator: string): Promise<PassSummary> {
    const header = await this.#newHeader(specimen, annotator);
    return this.#begin([this.#headerLine(header)], NEW_PASS, header);
  }

  /** A new pass that begins with one edit. */
  async createFilled(specimen: string, annotator: string, file: PassFile, first: FirstEdit): Promise<PassSummary> {
    const header = await this.#newHeader(specimen, annotator);
    const stamp = { t: this.#options.now(), mono: 0, session: createId(this.#options.random) };
    const { history, lines } = PassHistory.begin(header, stamp);
    lines.push(...history.commit(first.operation, first.label, first.curves, stamp));
    return this.#begin(lines, file, header);
  }

  /** A new pass that repeats the records of `lines` (a whole log) under a header of its own. @throws unreadable-input */
  async adopt(specimen: string, lines: readonly string[], file: PassFile): Promise<PassSummary> {
    const [first, ...rest] = readChain(lines, undefined, "The log sent").map(({ record }) => record);
    if (first?.kind !== "header")
      throw new TautlineError("bad-request", "The log sent is empty.", { what: "no lines", where: "body.lines" });
    const header = await this.#newHeader(specimen, first.body.annotator);
    const chained = [this.#headerLine(header)];
    for (const record of rest) chained.push(lineOf({ ...record, prev: hashOfLine(chained[chained.length - 1]!) }));
    return this.#begin(chained, file, header);
  }

  /**
   * A pass with the given id that holds `records` under a header of its own. When it is there already with the same records,
   * nothing is done: whoever was stopped in between asks again. @throws conflict when it is there with others
   */
  async takeIn(given: TakenInPass, file: PassFile): Promise<PassSummary> {
    const { specimen, pass, annotator, records } = given;
    const [first, ...rest] = records;
    if (first?.kind !== "header")
      throw new TautlineError("bad-request", "The log is empty.", { what: "no header", where: "log" });
    const begun = await this.journal(specimen, pass).catch((error) => {
      if (isTautlineError(error, "not-found")) return null;
      throw error;
    });
    const header = begun?.header ?? { ...(await this.#newHeader(specimen, annotator)), pass, epoch: first.body.epoch };
    const chained = [lineOf({ ...first, prev: "", body: header })];
    for (const record of rest) chained.push(lineOf({ ...record, prev: hashOfLine(chained[chained.length - 1]!) }));
    if (!begun) return this.#begin(chained, file, header);
    const last = hashOfLine(chained[chained.length - 1]!);
    if (begun.head.hash === last) return this.summary(specimen, pass);
    throw new TautlineError("conflict", "The pass is in the library already, with another log; it stays as it is.", {
      what: "pass",
      expected: last,
      found: begun.head.hash,
    });
  }

  /** Writes the journal of a pass whose own was lost, from the window's copy. @throws conflict when there is one */
  async rebuild(specimen: string, pass: string, lines: readonly string[]): Promise<Journal> {
    const { files, layout, mayWrite } = this.#options;
    const first = readChain(lines, undefined, "The log sent")[0]?.record;
    if (first?.kind !== "header" || first.body.pass !== pass || first.body.specimen !== specimen) {
      const found = first?.kind === "header" ? `pass ${first.body.pass}` : "no header";
      throw new TautlineError("conflict", `The log sent belongs to another pass (${found}).`, {
        what: "pass",
        expected: pass,
        found,
      });
    }
    await mayWrite();
    await makeFolder(files, layout.pass(specimen, pass));
    const path = layout.journal(specimen, pass);
    return this.#open(path, () => Journal.create(files, path, lines, mayWrite), pass);
  }

  async changeFile(specimen: string, pass: string, change: (file: PassFile) => PassFile): Promise<void> {
    const { files, layout, mayWrite } = this.#options;
    await this.journal(specimen, pass);
    await mayWrite();
    const path = layout.passFile(specimen, pass);
    await writeJson(files, path, change(await readPassFile(files, path)));
  }

  /** Closes the journals of a specimen, or all. */
  async close(specimen?: string): Promise<void> {
    const within = specimen === undefined ? "" : `${this.#options.layout.specimen(specimen)}${sep}`;
    this.#folds.forget(within);
    for (const path of this.#returned.keys()) if (path.startsWith(within)) this.#returned.delete(path);
    for (const key of this.#summaries.keys())
      if (specimen === undefined || key.startsWith(`${specimen}/`)) this.#summaries.delete(key);
    for (const [path, journal] of this.#journals) {
      if (!path.startsWith(within)) continue;
      this.#journals.delete(path);
      await (await journal).close();
    }
  }

  #open(path: string, work: () => Promise<Journal | undefined>, pass: string): Promise<Journal> {
    const opened = work().then((journal) => {
      if (!journal) throw new TautlineError("not-found", "There is no such pass in the library.", { what: "pass", id: pass });
      return journal;
    });
    this.#journals.set(path, opened);
    opened.catch(() => this.#journals.delete(path));
    return opened;
  }

  async #begin(lines: readonly string[], file: PassFile, header: LogHeader): Promise<PassSummary> {
    const { files, layout, mayWrite } = this.#options;
    const { specimen, pass } = header;
    await mayWrite();
    await makeFolder(files, layout.pass(specimen, pass));
    files.reach("pass:after-folder");
    this.#returned.delete(layout.passFile(specimen, pass));
    // The journal comes last: a folder without one is no pass, so a killed process leaves none half-made.
    if (file !== NEW_PASS) await writeJson(files, layout.passFile(specimen, pass), file);
    const path = layout.journal(specimen, pass);
    await this.#open(path, () => Journal.create(files, path, lines, mayWrite), pass);
    return this.summary(specimen, pass);
  }

  async #newHeader(specimen: string, annotator: string): Promise<LogHeader> {
    const { random } = this.#options;
    let number = 1;
    for (const id of await this.ids(specimen)) {
      const other = await this.journal(specimen, id).catch(() => null);
      if (other?.header.annotator === annotator) number = Math.max(number, other.header.number + 1);
    }
    const pass = createId(random);
    return { format: LOG_FORMAT, version: LOG_VERSION, pass, specimen, annotator, number, epoch: createId(random) };
  }

  #headerLine(body: LogHeader): string {
    const session = createId(this.#options.random);
    return lineOf({
      seq: 0,
      parent: 0,
      prev: "",
      t: this.#options.now(),
      mono: 0,
      session,
      kind: "header",
      label: "Pass begun",
      body,
    });
  }
}
