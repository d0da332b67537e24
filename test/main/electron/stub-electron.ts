import { mkdir, writeFile } from "node:fs/promises";
import { join } from "node:path";

/** Marks the place of the fuses in an Electron binary (from the fuses tool's own source). */
const SENTINEL = "dL7pKGdnNz796PbbjQWNKmHXBZaB9tsX";

/**
 * A folder that stands in for an unpacked Electron where there is no network: a file in the binary's place that carries the
 * fuse sentinel, the wire's version and eight fuses as Electron ships them.
 */
export async function stubElectron(folder: string): Promise<void> {
  await mkdir(join(folder, "resources"), { recursive: true });
  await mkdir(join(folder, "locales"), { recursive: true });
  const wire = Buffer.concat([Buffer.from(SENTINEL), Buffer.from([1, 8]), Buffer.from("10110001")]);
  const binary = Buffer.concat([Buffer.from("a stub, no program"), wire, Buffer.from("end")]);
  for (const name of ["electron", "electron.exe"]) await writeFile(join(folder, name), binary, { mode: 0o755 });
  await writeFile(join(folder, "version"), "45.5.0");
  await writeFile(join(folder, "LICENSE"), "stub");
  await writeFile(join(folder, "LICENSES.chromium.html"), "stub");
}
