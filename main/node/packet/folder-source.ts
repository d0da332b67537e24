import { basename, join } from "node:path";
import type { FilePort } from "#main/node/file-port.ts";
import { MOST_FILES, type PacketEntry, type PacketSource, PIECE_BYTES } from "#main/node/packet/packet-source.ts";
import { unreadable } from "#shared/errors.ts";
import { checkBagPath } from "#shared/formats/bagit/bag-texts.ts";

/** Folders within folders that a packet may have. */
const MOST_DEPTH = 16;

/** A packet that is a folder. Links and devices in it are refused. @throws unreadable-input */
export async function openPacketFolder(files: FilePort, folder: string): Promise<PacketSource> {
  const name = basename(folder);
  const entries: PacketEntry[] = [];
  const walk = async (path: string, inside: string, depth: number): Promise<void> => {
    for (const { name: part } of (await files.list(path)) ?? []) {
      const below = inside === "" ? part : `${inside}/${part}`;
      checkBagPath(below, name, below);
      const facts = await files.facts(join(path, part));
      if (facts?.kind === "folder") {
        if (depth >= MOST_DEPTH) throw unreadable(name, `at most ${MOST_DEPTH} folders within each other`, "more", below);
        await walk(join(path, part), below, depth + 1);
      } else if (facts?.kind === "file") entries.push({ path: below, bytes: facts.bytes });
      else throw unreadable(name, "plain files", facts?.kind === "link" ? "a link" : "something else", below);
      if (entries.length > MOST_FILES) throw unreadable(name, `at most ${MOST_FILES} files`, "more");
    }
  };
  await walk(folder, "", 0);
  entries.sort((a, b) => (a.path < b.path ? -1 : 1));
  const bytesOf = new Map(entries.map(({ path, bytes }) => [path, bytes]));
  return {
    name,
    entries,
    async *pieces(path) {
      const bytes = bytesOf.get(path);
      if (bytes === undefined) throw unreadable(name, "a file", "none", path);
      for (let at = 0; at < bytes; at += PIECE_BYTES) {
        const end = Math.min(bytes, at + PIECE_BYTES);
        const piece = await files.read(join(folder, ...path.split("/")), at, end);
        if (piece?.length !== end - at)
          throw unreadable(name, `${bytes} bytes`, `${at + (piece?.length ?? 0)}`, path, "The packet changed while it was read.");
        yield piece;
      }
    },
  };
}
