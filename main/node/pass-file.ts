import type { FilePort } from "#main/node/file-port.ts";
import { readJsonFile } from "#main/node/whole-file.ts";
import type { PassState } from "#shared/api/specimen.ts";
import { unreadable } from "#shared/errors.ts";

/** `passes/<id>/pass.json`: what is said about a pass beside its journal. A pass without the file is under way. */
export interface PassFile {
  readonly format: "tautline-pass";
  readonly version: 1;
  readonly state: PassState;
  readonly synthetic: boolean;
  /** Name of a recovered branch. */
  readonly name?: string;
  /** Set on a pass that came back from an annotator: it stays as it was handed over. */
  readonly returned?: { readonly study: string; readonly assignment: string };
}

export const NEW_PASS: PassFile = { format: "tautline-pass", version: 1, state: "under-way", synthetic: false };

/** The pass file at `path`; {@link NEW_PASS} when there is none. @throws unreadable-input */
export async function readPassFile(files: FilePort, path: string): Promise<PassFile> {
  const value = await readJsonFile(files, path, "pass.json");
  if (value === undefined) return NEW_PASS;
  const { format, version, state } = (value ?? {}) as Partial<PassFile>;
  if (format !== NEW_PASS.format) throw unreadable("pass.json", `format ${NEW_PASS.format}`, `format ${String(format)}`);
  if (version !== NEW_PASS.version) {
    throw unreadable(
      "pass.json",
      "version 1",
      `version ${String(version)}`,
      undefined,
      "It was written by a newer version of the program.",
    );
  }
  if (state !== "under-way" && state !== "finished") throw unreadable("pass.json", "state under-way or finished", String(state));
  return value as PassFile;
}
