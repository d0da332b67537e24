import type { OpenBag } from "#main/node/packet/bag-reader.ts";
import type { PayloadFile } from "#main/node/packet/bag-writer.ts";
import type { PacketKind } from "#shared/api/study.ts";
import { unreadable } from "#shared/errors.ts";
import { PAYLOAD_FOLDER } from "#shared/formats/bagit/bag-texts.ts";
import { PACKET_FILE, type Packet, parsePacket } from "#shared/study/packet.ts";

const MOST_JSON_BYTES = 16 * 1024 * 1024;

/** A value as a JSON file of a payload. */
export function jsonPayload(path: string, value: unknown): PayloadFile {
  return { path, bytes: new TextEncoder().encode(`${JSON.stringify(value, null, 2)}\n`) };
}

/** Lines of `bag-info.txt`: what the bag is, and no name and no time that could tell one from another. */
export function bagInfo(kind: PacketKind, softwareVersion: string): Record<string, string> {
  const what = { assignment: "An assignment", scan: "The scan of an assignment", return: "A returned pass" }[kind];
  return {
    "Bag-Software-Agent": `Tautline ${softwareVersion}`,
    "Internal-Sender-Description": `${what} of an agreement study. Research use only.`,
  };
}

/** What a bag says it is. @throws unreadable-input */
export async function packetOf(bag: OpenBag): Promise<Packet> {
  const file = `${PAYLOAD_FOLDER}${PACKET_FILE}`;
  if (!bag.payload.has(file)) {
    const next = "This is a bag, but not one with an assignment or a pass in it.";
    throw unreadable(bag.name, `the file '${file}'`, "none", file, next);
  }
  return parsePacket(await readJson(bag, file), `${bag.name}, ${file}`);
}

/** A JSON file of a bag, verified. @throws unreadable-input */
export async function readJson(bag: OpenBag, path: string, most = MOST_JSON_BYTES): Promise<unknown> {
  const bytes = await bag.read(path, most);
  try {
    return JSON.parse(new TextDecoder("utf-8", { fatal: true }).decode(bytes));
  } catch {
    throw unreadable(bag.name, "JSON in UTF-8", `${bytes.length} bytes that are not`, path);
  }
}
