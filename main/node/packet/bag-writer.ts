import { createHash } from "node:crypto";
import { dirname, join } from "node:path";
import { writeFault } from "#main/node/disk-fault.ts";
import type { FilePort } from "#main/node/file-port.ts";
import { crcAfter } from "#main/node/packet/crc.ts";
import { PIECE_BYTES } from "#main/node/packet/packet-source.ts";
import { SIGNATURE_FILE, type SigningKey } from "#main/node/packet/signing.ts";
import { writeZip, type ZipFile } from "#main/node/packet/zip-writer.ts";
import { UNFINISHED } from "#main/node/whole-file.ts";
import type { PacketForm } from "#shared/api/study.ts";
import { TautlineError, unreadable } from "#shared/errors.ts";
import {
  BAG_DECLARATION,
  BAG_INFO,
  bagDeclarationText,
  bagInfoText,
  checkBagPath,
  manifestText,
  PAYLOAD_FOLDER,
  PAYLOAD_MANIFEST,
  TAG_MANIFEST,
} from "#shared/formats/bagit/bag-texts.ts";

/** A file of the payload, `path` below `data/`: bytes, or a file on the disk. */
export type PayloadFile = { readonly path: string } & (
  | { readonly bytes: Uint8Array }
  | { readonly file: string; readonly size: number }
);

export interface BagOrder {
  /** Name of the bag: of its folder, and of its zip file without the ending. */
  readonly name: string;
  /** An existing folder. */
  readonly folder: string;
  readonly form: PacketForm;
  readonly payload: readonly PayloadFile[];
  /** Lines of `bag-info.txt` besides the Payload-Oxum. */
  readonly info: Readonly<Record<string, string>>;
  readonly key: SigningKey | null;
}

export interface BagHooks {
  readonly signal?: AbortSignal | undefined;
  /** Called with the share that is done, 0-1. */
  onShare?(share: number): void;
}

/**
 * Writes a bag under a temporary name, syncs it and gives it its name; an existing name is refused. Payload files on the disk are
 * read twice (hash, then copy), piece by piece.
 * @throws conflict when the name is taken, disk-full, write-failed, cancelled
 */
export async function writeBag(files: FilePort, order: BagOrder, hooks: BagHooks = {}): Promise<{ path: string; bytes: number }> {
  const path = bagPath(order);
  await refuseTaken(files, path);
  const meter = new ShareMeter(order.payload, hooks);
  const payload: Measured[] = [];
  for (const file of order.payload) payload.push(await measured(files, file, meter));
  const all = [...(await tagFiles(order, payload)), ...payload];
  const temporary = `${path}${UNFINISHED}`;
  try {
    await files.remove(temporary);
    const bytes =
      order.form === "zip"
        ? await writeZipFile(files, temporary, order.name, all, meter)
        : await writeFolder(files, temporary, all, meter);
    await refuseTaken(files, path);
    files.reach("packet:before-rename");
    await files.rename(temporary, path);
    await files.syncFolder(dirname(path));
    return { path, bytes };
  } catch (error) {
    const fault = await writeFault(files, path, error);
    await files.remove(temporary).catch(() => undefined);
    throw fault;
  }
}

/** Where a bag of this order will stand. */
export function bagPath({ folder, name, form }: Pick<BagOrder, "folder" | "name" | "form">): string {
  return join(folder, form === "zip" ? `${name}.zip` : name);
}

/** @throws conflict when there is something at the path: packets never replace anything */
export async function refuseTaken(files: FilePort, path: string): Promise<void> {
  if (!(await files.facts(path))) return;
  const name = path.slice(dirname(path).length + 1);
  const sentence = `There is already something named ${name} in this folder; it stays as it is. Choose another folder, or move it away first.`;
  throw new TautlineError("conflict", sentence, { what: name, expected: "no such name", found: "a file or folder" });
}

interface Measured {
  readonly path: string;
  readonly bytes: number;
  readonly sha256: string;
  readonly crc32: number;
  pieces(): AsyncGenerator<Uint8Array, void, void>;
}

/** The tag files of the bag, each hashed. */
async function tagFiles(order: BagOrder, payload: readonly Measured[]): Promise<Measured[]> {
  const text = (path: string, content: string) => inMemory(path, new TextEncoder().encode(content));
  const oxum = { bytes: payload.reduce((sum, { bytes }) => sum + bytes, 0), files: payload.length };
  const listed = [
    text(BAG_DECLARATION, bagDeclarationText()),
    text(BAG_INFO, bagInfoText(oxum, order.info)),
    text(PAYLOAD_MANIFEST, manifestText(payload)),
  ];
  const manifest = manifestText(listed);
  const tags = [...listed, text(TAG_MANIFEST, manifest)];
  if (order.key) tags.push(text(SIGNATURE_FILE, await order.key.signatureText(new TextEncoder().encode(manifest))));
  return tags;
}

async function measured(files: FilePort, file: PayloadFile, meter: ShareMeter): Promise<Measured> {
  const path = `${PAYLOAD_FOLDER}${file.path}`;
  checkBagPath(path, "the packet", path);
  if ("bytes" in file) return inMemory(path, file.bytes);
  const hash = createHash("sha256");
  let crc32 = 0;
  const pieces = () => piecesOf(files, file.file, file.size, file.path);
  for await (const piece of pieces()) {
    hash.update(piece);
    crc32 = crcAfter(crc32, piece);
    meter.add(piece.length);
  }
  return { path, bytes: file.size, sha256: hash.digest("hex"), crc32, pieces };
}

function inMemory(path: string, bytes: Uint8Array): Measured {
  return {
    path,
    bytes: bytes.length,
    sha256: createHash("sha256").update(bytes).digest("hex"),
    crc32: crcAfter(0, bytes),
    async *pieces() {
      if (bytes.length > 0) yield bytes;
    },
  };
}

async function* piecesOf(files: FilePort, file: string, size: number, path: string): AsyncGenerator<Uint8Array, void, void> {
  for (let at = 0; at < size; at += PIECE_BYTES) {
    const end = Math.min(size, at + PIECE_BYTES);
    const piece = await files.read(file, at, end);
    if (piece?.length !== end - at) throw unreadable(path, `${size} bytes`, `${at + (piece?.length ?? 0)}`);
    yield piece;
  }
}

async function writeZipFile(files: FilePort, path: string, name: string, all: readonly Measured[], meter: ShareMeter) {
  await files.create(path, new Uint8Array(0));
  const file = await files.openAppend(path);
  try {
    const entries = all.map(
      (one): ZipFile => ({ ...one, name: `${name}/${one.path}`, pieces: () => meter.watched(one.pieces()) }),
    );
    const bytes = await writeZip(file, entries);
    await file.sync();
    return bytes;
  } finally {
    await file.close();
  }
}

async function writeFolder(files: FilePort, folder: string, all: readonly Measured[], meter: ShareMeter): Promise<number> {
  const folders = new Set<string>([folder]);
  await files.makeFolder(folder);
  for (const one of all) {
    const path = join(folder, ...one.path.split("/"));
    const above = dirname(path);
    if (!folders.has(above)) await files.makeFolder(above);
    for (let at = above; at !== folder; at = dirname(at)) folders.add(at);
    await writeStreamed(files, path, meter.watched(one.pieces()));
  }
  // From the deepest up: a folder's names are safe once it is synced.
  for (const one of [...folders].sort((a, b) => b.length - a.length)) await files.syncFolder(one);
  return all.reduce((sum, { bytes }) => sum + bytes, 0);
}

/** Writes a new file piece by piece and syncs it; its name is not safe until its folder is synced. */
export async function writeStreamed(files: FilePort, path: string, pieces: AsyncIterable<Uint8Array>): Promise<void> {
  await files.create(path, new Uint8Array(0));
  const file = await files.openAppend(path);
  try {
    for await (const piece of pieces) await file.append(piece);
    await file.sync();
  } finally {
    await file.close();
  }
}

/** Tells how far a bag is: every byte on the disk is read twice. */
class ShareMeter {
  readonly #whole: number;
  readonly #hooks: BagHooks;
  #done = 0;

  constructor(payload: readonly PayloadFile[], hooks: BagHooks) {
    this.#whole = payload.reduce((sum, file) => sum + ("bytes" in file ? file.bytes.length : 2 * file.size), 1);
    this.#hooks = hooks;
  }

  add(bytes: number): void {
    if (this.#hooks.signal?.aborted) throw new TautlineError("cancelled", "Stopped.", { what: "writing the packet" });
    this.#done += bytes;
    this.#hooks.onShare?.(Math.min(1, this.#done / this.#whole));
  }

  async *watched(pieces: AsyncGenerator<Uint8Array, void, void>): AsyncGenerator<Uint8Array, void, void> {
    for await (const piece of pieces) {
      yield piece;
      this.add(piece.length);
    }
  }
}
