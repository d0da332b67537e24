import { zipSync } from "fflate";

/** A zip of files; the same files give the same bytes (entries carry the format's first date, not today's). */
export function zipped(files: readonly { readonly name: string; readonly bytes: Uint8Array }[]): Uint8Array {
  const entries = Object.fromEntries(files.map(({ name, bytes }) => [name, bytes]));
  return zipSync(entries, { mtime: "1980-01-02T00:00:00" });
}
