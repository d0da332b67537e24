import { createHash } from "node:crypto";
import { UnsyncedFiles } from "#test/main/node/unsynced-files.ts";

const sha = (text: string | Uint8Array) => createHash("sha256").update(text).digest("hex");

/**
 * The files of a bag as RFC 8493 words them, written here by hand and not by the program: declaration (2.1.1), payload below
 * `data/` (2.1.2), manifest (2.1.3), tag manifest (2.2.1), bag-info (2.2.2).
 */
export function handMadeBag(payload: Record<string, string>): Record<string, string> {
  const files: Record<string, string> = {};
  let bytes = 0;
  for (const [path, text] of Object.entries(payload)) {
    files[`data/${path}`] = text;
    bytes += Buffer.byteLength(text);
  }
  files["bagit.txt"] = "BagIt-Version: 1.0\nTag-File-Character-Encoding: UTF-8\n";
  files["bag-info.txt"] = `Source-Organization: nobody\nPayload-Oxum: ${bytes}.${Object.keys(payload).length}\n`;
  files["manifest-sha256.txt"] = Object.entries(payload)
    .map(([path, text]) => `${sha(text)} data/${path}\n`)
    .join("");
  return { ...files, "tagmanifest-sha256.txt": tagManifest(files) };
}

/** The tag manifest that fits the other tag files. */
export function tagManifest(files: Record<string, string>): string {
  return ["bagit.txt", "bag-info.txt", "manifest-sha256.txt"].map((path) => `${sha(files[path]!)}  ${path}\n`).join("");
}

/** Puts files below a folder of a disk in memory. */
export async function putFiles(folder: string, files: Record<string, string | Uint8Array>): Promise<UnsyncedFiles> {
  const disk = new UnsyncedFiles();
  await disk.makeFolder(folder);
  for (const [path, content] of Object.entries(files)) {
    const whole = `${folder}/${path}`;
    await disk.makeFolder(whole.slice(0, whole.lastIndexOf("/")));
    await disk.create(whole, typeof content === "string" ? new TextEncoder().encode(content) : content);
  }
  return disk;
}
