import { createHash } from "node:crypto";
import { readdir, readFile, writeFile } from "node:fs/promises";
import { join } from "node:path";

// Bags as folders, by the letter of RFC 8493 and without the program's own code: what a person with a text editor could make.

const hashOf = (bytes: Uint8Array) => createHash("sha256").update(bytes).digest("hex");

async function filesBelow(folder: string, path: string): Promise<string[]> {
  const entries = await readdir(join(folder, path), { withFileTypes: true });
  const found = await Promise.all(
    entries.map((entry) => {
      const inner = `${path}/${entry.name}`;
      return entry.isDirectory() ? filesBelow(folder, inner) : [inner];
    }),
  );
  return found.flat().sort();
}

/** Makes the manifests of a bag agree with its files again, after they were changed by hand. */
export async function resealBag(folder: string): Promise<void> {
  const payload = await filesBelow(folder, "data");
  const contents = await Promise.all(payload.map((path) => readFile(join(folder, path))));
  const manifest = payload.map((path, k) => `${hashOf(contents[k]!)}  ${path}\n`).join("");
  await writeFile(join(folder, "manifest-sha256.txt"), manifest);
  const info = await readFile(join(folder, "bag-info.txt"), "utf8");
  const octets = contents.reduce((sum, { length }) => sum + length, 0);
  await writeFile(join(folder, "bag-info.txt"), info.replace(/Payload-Oxum: .*/, `Payload-Oxum: ${octets}.${payload.length}`));
  const tags = ["bag-info.txt", "bagit.txt", "manifest-sha256.txt"];
  const lines = await Promise.all(tags.map(async (path) => `${hashOf(await readFile(join(folder, path)))}  ${path}\n`));
  await writeFile(join(folder, "tagmanifest-sha256.txt"), lines.join(""));
}

/** Every file of a bag as text, for looking for what must not be in it. */
export async function wholeText(folder: string): Promise<string> {
  const paths = [...(await filesBelow(folder, "data")), "bagit.txt", "bag-info.txt", "manifest-sha256.txt"];
  const texts = await Promise.all(paths.map((path) => readFile(join(folder, path), "latin1")));
  return [...paths, ...texts].join("\n");
}
