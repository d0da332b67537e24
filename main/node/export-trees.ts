import type { ExportPort } from "#main/http/ports.ts";
import type { FilePort } from "#main/node/file-port.ts";
import type { Library } from "#main/node/library.ts";
import { TautlineError } from "#shared/errors.ts";

export interface ExportOptions {
  readonly library: Library;
  readonly files: FilePort;
  readonly version: string;
  /** UTC milliseconds. */
  readonly now: () => number;
}

/** Writes the trees of a pass in the format that is asked for. */
export function exportTrees(_options: ExportOptions): ExportPort {
  return {
    async exportTrees(request) {
      throw new TautlineError("internal", `The format ${request.format} is not written yet.`, { what: request.format });
    },
  };
}
