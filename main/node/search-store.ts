import { Buffer } from "node:buffer";
import { join } from "node:path";
import { writeFault } from "#main/node/disk-fault.ts";
import type { AppendFile, FilePort } from "#main/node/file-port.ts";
import { Turns } from "#main/node/turns.ts";
import { type FoundPoints, SEARCH_VERSION } from "#shared/tracing/overlooked/search-block.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";

const FORMAT = "tautline-search";
/** Bytes of a point: three int32 (voxel), strength, radius, share as float32. */
const POINT_BYTES = 24;
/** Blocks written between two syncs; what a power cut takes of a search is found again. */
const SYNC_EVERY = 64;

/**
 * What the search of one scan and polarity found, in a file of its own beside the scan: a line for the header, then a line for each
 * block. A cache: deleted, of another version or damaged, it is searched anew, wholly or from the damage on.
 */
export class SearchStore {
  readonly #files: FilePort;
  readonly #path: string;
  readonly #header: string;
  readonly blocks = new Map<number, FoundPoints>();
  /** Lines are written one after the other, whoever found them. */
  readonly #turns = new Turns();
  #file: AppendFile | null = null;
  #whole = 0;
  #unsynced = 0;

  private constructor(files: FilePort, path: string, header: string) {
    this.#files = files;
    this.#path = path;
    this.#header = header;
  }

  /** @param folder the specimen's. @param sha256 of the scan. @param total blocks of the searched level. */
  static async open(files: FilePort, folder: string, sha256: string, polarity: Polarity, total: number): Promise<SearchStore> {
    const header = JSON.stringify({ format: FORMAT, version: SEARCH_VERSION, sha256, polarity, blocks: total });
    const store = new SearchStore(files, join(folder, `search-${polarity}.jsonl`), header);
    await store.#read(total);
    return store;
  }

  /** Keeps a block's points. @throws write-failed, disk-full */
  add(block: number, points: FoundPoints): Promise<void> {
    this.blocks.set(block, points);
    return this.#turns.take(() => this.#append(block, points));
  }

  async #append(block: number, points: FoundPoints): Promise<void> {
    const line = `${JSON.stringify({ block, points: packed(points) })}\n`;
    try {
      this.#file ??= await this.#openForWriting();
      const bytes = new TextEncoder().encode(line);
      await this.#file.append(bytes);
      this.#whole += bytes.length;
      this.#unsynced += 1;
      if (this.#unsynced >= SYNC_EVERY) await this.sync();
    } catch (error) {
      // Part of the line may stand there: opened again, the file is cut to its last whole line.
      await this.#file?.close().catch(() => undefined);
      this.#file = null;
      throw await writeFault(this.#files, this.#path, error, line.length);
    }
  }

  /** Resolves once all is on the disk. */
  async sync(): Promise<void> {
    this.#unsynced = 0;
    await this.#file?.sync();
  }

  /** Resolves once all that was added is on the disk and the file is closed; what is added later opens it again. */
  close(): Promise<void> {
    return this.#turns.take(async () => {
      const file = this.#file;
      this.#file = null;
      await file?.sync();
      await file?.close();
    });
  }

  async #openForWriting(): Promise<AppendFile> {
    if (this.#whole === 0) {
      await this.#files.remove(this.#path);
      const header = new TextEncoder().encode(`${this.#header}\n`);
      await this.#files.create(this.#path, header);
      this.#whole = header.length;
      return this.#files.openAppend(this.#path);
    }
    const file = await this.#files.openAppend(this.#path);
    // Half a line at the end is what a killed process left.
    await file.truncate(this.#whole);
    return file;
  }

  /** Takes in the lines that can be read, up to the first that cannot. */
  async #read(total: number): Promise<void> {
    const bytes = await this.#files.read(this.#path).catch(() => undefined);
    if (!bytes) return;
    let from = 0;
    for (let end = bytes.indexOf(10); end >= 0; from = end + 1, end = bytes.indexOf(10, from)) {
      const line = new TextDecoder().decode(bytes.subarray(from, end));
      if (from === 0 ? line !== this.#header : !this.#take(line, total)) return;
      this.#whole = end + 1;
    }
  }

  #take(line: string, total: number): boolean {
    try {
      const { block, points } = JSON.parse(line) as { block: unknown; points: unknown };
      if (!Number.isInteger(block) || (block as number) < 0 || (block as number) >= total || typeof points !== "string")
        return false;
      const found = unpacked(points);
      if (!found) return false;
      this.blocks.set(block as number, found);
      return true;
    } catch {
      return false;
    }
  }
}

function packed({ voxels, strengths, radii, shares }: FoundPoints): string {
  const bytes = new Uint8Array(POINT_BYTES * strengths.length);
  let at = 0;
  for (const array of [voxels, strengths, radii, shares]) {
    bytes.set(new Uint8Array(array.buffer, array.byteOffset, array.byteLength), at);
    at += array.byteLength;
  }
  return Buffer.from(bytes).toString("base64");
}

function unpacked(text: string): FoundPoints | null {
  const bytes = new Uint8Array(Buffer.from(text, "base64"));
  if (bytes.length % POINT_BYTES !== 0) return null;
  const n = bytes.length / POINT_BYTES;
  return {
    voxels: new Int32Array(bytes.slice(0, 12 * n).buffer),
    strengths: new Float32Array(bytes.slice(12 * n, 16 * n).buffer),
    radii: new Float32Array(bytes.slice(16 * n, 20 * n).buffer),
    shares: new Float32Array(bytes.slice(20 * n).buffer),
  };
}
