import { unreadable } from "#shared/errors.ts";

// The tag files of a bag, BagIt 1.0 (RFC 8493). A bag: `bagit.txt`, `bag-info.txt`, `manifest-sha256.txt` over everything below
// `data/`, `tagmanifest-sha256.txt` over the tag files.

/** Name of the file that says what a bag is. */
export const BAG_DECLARATION = "bagit.txt";
/** Name of the file that says what is in the bag. */
export const BAG_INFO = "bag-info.txt";
/** Name of the list of payload files with their SHA-256. */
export const PAYLOAD_MANIFEST = "manifest-sha256.txt";
/** Name of the list of tag files with their SHA-256. */
export const TAG_MANIFEST = "tagmanifest-sha256.txt";
/** Everything a bag carries lies below it. */
export const PAYLOAD_FOLDER = "data/";

/** A file of a bag with its SHA-256 (hex, lower case); `path` from the bag's folder, `/` between parts. */
export interface ManifestEntry {
  readonly path: string;
  readonly sha256: string;
}

/** Text of `bagit.txt`. @source RFC 8493 section 2.1.1 */
export function bagDeclarationText(): string {
  return "BagIt-Version: 1.0\nTag-File-Character-Encoding: UTF-8\n";
}

/**
 * Checks the text of a `bagit.txt`: version 1.0, UTF-8.
 * @throws unreadable-input
 */
export function checkBagDeclaration(text: string, packet: string): void {
  const [version, encoding, ...rest] = linesOf(text);
  const found = /^BagIt-Version: (\d+\.\d+)$/.exec(version ?? "")?.[1];
  if (found === undefined) throw unreadable(packet, "a bag's declaration (BagIt-Version: 1.0)", brief(version), BAG_DECLARATION);
  if (found !== "1.0") throw unreadable(packet, "BagIt version 1.0", `version ${found}`, BAG_DECLARATION);
  if (encoding !== "Tag-File-Character-Encoding: UTF-8" || rest.length > 0)
    throw unreadable(
      packet,
      "the one line 'Tag-File-Character-Encoding: UTF-8' after the version",
      brief(encoding),
      BAG_DECLARATION,
    );
}

/** Text of a manifest, in the order of the paths. @source RFC 8493 section 2.1.3: CR, LF and % of a path are percent-encoded */
export function manifestText(entries: readonly ManifestEntry[]): string {
  const sorted = [...entries].sort((a, b) => (a.path < b.path ? -1 : 1));
  return sorted.map(({ path, sha256 }) => `${sha256}  ${encodePath(path)}\n`).join("");
}

/**
 * The entries of a manifest by path. A path that is listed twice, or under two spellings that some disks hold for one (capital
 * letters, composed accents), is refused.
 * @param most entries that are accepted
 * @throws unreadable-input naming the line
 */
export function parseManifest(text: string, packet: string, file: string, most: number): Map<string, string> {
  const entries = new Map<string, string>();
  const spellings = new Set<string>();
  for (const [i, line] of linesOf(text).entries()) {
    const where = `${file}, line ${i + 1}`;
    if (i >= most) throw unreadable(packet, `at most ${most} files`, "more", file);
    const match = /^([0-9A-Fa-f]{64})[ \t]+(.+)$/.exec(line);
    if (!match) throw unreadable(packet, "a SHA-256 and a path", brief(line), where);
    const path = decodePath(match[2]!);
    checkBagPath(path, packet, where);
    if (entries.has(path) || spellings.has(spelling(path)))
      throw unreadable(packet, "every file once", `${brief(path)} twice`, where);
    entries.set(path, match[1]!.toLowerCase());
    spellings.add(spelling(path));
  }
  return entries;
}

/** What `bag-info.txt` of this program's packets says. */
export interface BagInfo {
  /** Bytes and number of all payload files. */
  readonly oxum: { readonly bytes: number; readonly files: number };
  readonly labels: ReadonlyMap<string, string>;
}

/** Text of `bag-info.txt`. @param labels further lines, names and values of one line each. @source RFC 8493 section 2.2.2 */
export function bagInfoText(oxum: BagInfo["oxum"], labels: Readonly<Record<string, string>>): string {
  const lines = { ...labels, "Payload-Oxum": `${oxum.bytes}.${oxum.files}` };
  return Object.entries(lines)
    .map(([name, value]) => `${name}: ${value}\n`)
    .join("");
}

/** @throws unreadable-input when there is no Payload-Oxum or a line is none */
export function parseBagInfo(text: string, packet: string): BagInfo {
  const labels = new Map<string, string>();
  let last: string | null = null;
  for (const [i, line] of linesOf(text).entries()) {
    if (last !== null && /^[ \t]/.test(line)) {
      labels.set(last, `${labels.get(last)} ${line.trim()}`);
      continue;
    }
    const match = /^([^:]+):[ \t]?(.*)$/.exec(line);
    if (!match) throw unreadable(packet, "a label and its value", brief(line), `${BAG_INFO}, line ${i + 1}`);
    last = match[1]!.trim();
    labels.set(last, match[2]!.trim());
  }
  const oxum = /^(\d{1,15})\.(\d{1,9})$/.exec(labels.get("Payload-Oxum") ?? "");
  if (!oxum) throw unreadable(packet, "a Payload-Oxum (bytes.files)", brief(labels.get("Payload-Oxum")), BAG_INFO);
  return { oxum: { bytes: Number(oxum[1]), files: Number(oxum[2]) }, labels };
}

/**
 * Checks that a path stays in its bag on every system: parts of printable characters, none of them empty, `.` or `..`, no
 * backslash, colon or wildcard, no ending dot or space, no name that some systems keep for devices.
 * @throws unreadable-input
 */
export function checkBagPath(path: string, packet: string, where: string): void {
  const parts = path.split("/");
  const good =
    path.length <= 1024 &&
    parts.every(
      (part) =>
        part !== "" &&
        part.length <= 200 &&
        !/^\.+$/.test(part) &&
        !hasUnsafeSign(part) &&
        !/[. ]$/.test(part) &&
        !/^(con|prn|aux|nul|com\d|lpt\d)(\..*)?$/i.test(part),
    );
  if (!good) throw unreadable(packet, "a path that stays inside the packet", JSON.stringify(path.slice(0, 80)), where, UNSAFE);
}

/** True when a part has a control character or a sign that some systems give a meaning. */
function hasUnsafeSign(part: string): boolean {
  return [...part].some((sign) => sign < " " || sign === "\u007f" || '\\:*?"<>|'.includes(sign));
}

const UNSAFE = "It was not made by this program; nothing of it was taken in.";

/** The same for all paths that some disk takes for one file. */
export function spelling(path: string): string {
  return path.normalize("NFC").toLowerCase();
}

function encodePath(path: string): string {
  return path.replace(/[%\r\n]/g, (c) => `%${c.charCodeAt(0).toString(16).toUpperCase().padStart(2, "0")}`);
}

function decodePath(path: string): string {
  return path.replace(/%(0A|0D|25)/gi, (_, code: string) => String.fromCharCode(Number.parseInt(code, 16)));
}

function linesOf(text: string): string[] {
  const lines = text.split(/\r\n|\r|\n/);
  if (lines[lines.length - 1] === "") lines.pop();
  return lines;
}

function brief(text: string | undefined): string {
  return text === undefined ? "nothing" : JSON.stringify(text.slice(0, 60));
}
