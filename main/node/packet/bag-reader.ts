import { createHash } from "node:crypto";
import { basename } from "node:path";
import type { FilePort } from "#main/node/file-port.ts";
import { openPacketFolder } from "#main/node/packet/folder-source.ts";
import { MOST_FILES, type PacketSource } from "#main/node/packet/packet-source.ts";
import { fingerprintOf, SIGNATURE_FILE, verifiedKey } from "#main/node/packet/signing.ts";
import { openPacketZip } from "#main/node/packet/zip-source.ts";
import { TautlineError, unreadable } from "#shared/errors.ts";
import {
  BAG_DECLARATION,
  BAG_INFO,
  type BagInfo,
  checkBagDeclaration,
  PAYLOAD_FOLDER,
  PAYLOAD_MANIFEST,
  parseBagInfo,
  parseManifest,
  TAG_MANIFEST,
} from "#shared/formats/bagit/bag-texts.ts";

/** Largest tag file, bytes. */
const MOST_TAG_BYTES = 32 * 1024 * 1024;
const DAMAGED = "It was changed or damaged on its way; nothing was taken in. Ask for the packet again.";

/** A bag whose tag files are verified and whose payload is complete by name and size; its bytes are verified as they are read. */
export interface OpenBag {
  readonly name: string;
  readonly info: BagInfo;
  /** Payload files by path (with `data/`), and their bytes. */
  readonly payload: ReadonlyMap<string, number>;
  /** SHA-256 of the payload manifest: the same for the same payload. */
  readonly identity: string;
  /** Fingerprint of the key that signed the bag; null = unsigned. */
  readonly fingerprint: string | null;
  /** A payload file, verified piece by piece; the last piece comes only when the whole is as the manifest says. @throws unreadable-input */
  pieces(path: string): AsyncGenerator<Uint8Array, void, void>;
  /** A payload file, verified. @throws unreadable-input when it is missing, longer than `most` bytes, or not as the manifest says */
  read(path: string, most: number): Promise<Uint8Array>;
}

/**
 * Opens a packet, folder or zip, and verifies all that can be verified without reading its payload: declaration, tag manifest,
 * signature, Payload-Oxum, and that payload and manifest name the same files.
 * @throws unreadable-input with file, expected and found; not-found when there is nothing at the path
 */
export async function openBag(files: FilePort, path: string): Promise<OpenBag> {
  const source = await openSource(files, path);
  const { name } = source;
  const bytesOf = new Map(source.entries.map((entry) => [entry.path, entry.bytes]));
  const tag = async (file: string) => (await whole(source, file, bytesOf.get(file), MOST_TAG_BYTES)).bytes;
  checkBagDeclaration(textOf(await tag(BAG_DECLARATION), name, BAG_DECLARATION), name);
  const tagManifestBytes = await tag(TAG_MANIFEST);
  const tags = parseManifest(textOf(tagManifestBytes, name, TAG_MANIFEST), name, TAG_MANIFEST, 100);
  for (const needed of [BAG_DECLARATION, BAG_INFO, PAYLOAD_MANIFEST])
    if (!tags.has(needed)) throw unreadable(name, `${needed} to be listed`, "it is not", TAG_MANIFEST, DAMAGED);
  const tagTexts = new Map<string, Uint8Array>();
  for (const [file, expected] of tags) {
    const { bytes, sha256 } = await whole(source, file, bytesOf.get(file), MOST_TAG_BYTES);
    if (sha256 !== expected) throw mismatch(name, file, expected, sha256);
    tagTexts.set(file, bytes);
  }
  const key = bytesOf.has(SIGNATURE_FILE) ? verifiedKey(await tag(SIGNATURE_FILE), tagManifestBytes, name) : null;
  const info = parseBagInfo(textOf(tagTexts.get(BAG_INFO)!, name, BAG_INFO), name);
  const manifestBytes = tagTexts.get(PAYLOAD_MANIFEST)!;
  const manifest = parseManifest(textOf(manifestBytes, name, PAYLOAD_MANIFEST), name, PAYLOAD_MANIFEST, MOST_FILES);
  const payload = payloadOf(source, manifest, tags);
  const bytes = [...payload.values()].reduce((sum, one) => sum + one, 0);
  if (payload.size !== info.oxum.files || bytes !== info.oxum.bytes) {
    const found = `${bytes} bytes in ${payload.size}`;
    throw unreadable(name, `${info.oxum.bytes} bytes in ${info.oxum.files} files`, found, BAG_INFO, DAMAGED);
  }
  return {
    name,
    info,
    payload,
    identity: createHash("sha256").update(manifestBytes).digest("hex"),
    fingerprint: key && fingerprintOf(key),
    pieces: (file) => verifiedPieces(source, file, manifest.get(file)),
    async read(file, most) {
      const { bytes: content, sha256 } = await whole(source, file, payload.get(file), most);
      if (sha256 !== manifest.get(file)) throw mismatch(name, file, manifest.get(file)!, sha256);
      return content;
    },
  };
}

async function openSource(files: FilePort, path: string): Promise<PacketSource> {
  const facts = await files.facts(path);
  if (!facts) throw new TautlineError("not-found", "There is no packet at this place.", { what: "packet", id: basename(path) });
  if (facts.kind === "folder") return openPacketFolder(files, path);
  if (facts.kind === "file") return openPacketZip(files, path);
  throw unreadable(basename(path), "a packet, a folder or a zip file", facts.kind === "link" ? "a link" : "something else");
}

/** The payload's files; names what is missing, what is too much, and what has no place in a packet. */
function payloadOf(source: PacketSource, manifest: ReadonlyMap<string, string>, tags: ReadonlyMap<string, string>) {
  const { name } = source;
  const payload = new Map<string, number>();
  for (const { path, bytes } of source.entries) {
    if (path.startsWith(PAYLOAD_FOLDER)) {
      if (!manifest.has(path)) throw unreadable(name, "only files that the manifest lists", `'${path}'`, path, DAMAGED);
      payload.set(path, bytes);
    } else if (path !== TAG_MANIFEST && path !== SIGNATURE_FILE && !tags.has(path))
      throw unreadable(
        name,
        "only files of the packet",
        `'${path}'`,
        path,
        "Remove what does not belong to it, or ask for it again.",
      );
  }
  for (const path of manifest.keys()) {
    if (!path.startsWith(PAYLOAD_FOLDER))
      throw unreadable(name, `files below ${PAYLOAD_FOLDER}`, `'${path}'`, PAYLOAD_MANIFEST, DAMAGED);
    if (!payload.has(path)) throw unreadable(name, `the file '${path}'`, "none", path, DAMAGED);
  }
  return payload;
}

async function* verifiedPieces(source: PacketSource, path: string, expected: string | undefined) {
  const hash = createHash("sha256");
  let held: Uint8Array | null = null;
  for await (const piece of source.pieces(path)) {
    hash.update(piece);
    if (held) yield held;
    held = piece;
  }
  const found = hash.digest("hex");
  if (found !== expected) throw mismatch(source.name, path, expected ?? "none", found);
  if (held) yield held;
}

async function whole(source: PacketSource, path: string, size: number | undefined, most: number) {
  if (size === undefined) throw unreadable(source.name, `the file '${path}'`, "none", path, DAMAGED);
  if (size > most) throw unreadable(source.name, `at most ${most} bytes`, `${size}`, path);
  const bytes = new Uint8Array(size);
  let at = 0;
  for await (const piece of source.pieces(path)) {
    bytes.set(piece, at);
    at += piece.length;
  }
  return { bytes, sha256: createHash("sha256").update(bytes).digest("hex") };
}

function mismatch(name: string, path: string, expected: string, found: string) {
  return unreadable(name, `the SHA-256 ${expected.slice(0, 16)}...`, `${found.slice(0, 16)}...`, path, DAMAGED);
}

function textOf(bytes: Uint8Array, name: string, file: string): string {
  try {
    return new TextDecoder("utf-8", { fatal: true }).decode(bytes);
  } catch {
    throw unreadable(name, "text in UTF-8", "other bytes", file, DAMAGED);
  }
}
