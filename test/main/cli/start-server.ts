import { type ChildProcess, spawn } from "node:child_process";
import { once } from "node:events";
import { mkdir, mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { TOKEN_HEADER } from "#shared/api/routes.ts";
import { sampleSpecimen } from "#test/main/node/sample-log.ts";

/** The built program; tests that start it run after the build. */
const SERVER = join(process.env.TAUTLINE_DIST ?? fileURLToPath(new URL("../../../dist", import.meta.url)), "main", "server.mjs");

export interface Place {
  readonly folder: string;
  readonly library: string;
  readonly env: Record<string, string>;
  remove(): Promise<void>;
}

/** A folder for a library and a run's own files, without a display. */
export async function place(): Promise<Place> {
  const folder = await mkdtemp(join(tmpdir(), "tautline-server-"));
  const library = join(folder, "library");
  const { DISPLAY: _display, WAYLAND_DISPLAY: _wayland, TAUTLINE_BROWSER: _browser, ...rest } = process.env;
  const env = {
    ...(rest as Record<string, string>),
    TAUTLINE_LIBRARY: library,
    TAUTLINE_STATE: join(folder, "state"),
    // As on a computer without the Electron binary, also where it is there.
    ELECTRON_OVERRIDE_DIST_PATH: join(folder, "no-electron"),
  };
  return { folder, library, env, remove: () => rm(folder, { recursive: true, maxRetries: 5 }) };
}

/** Puts a specimen's record into a library, without a scan. */
export async function putSpecimenOnDisk(library: string, id: string): Promise<void> {
  await mkdir(join(library, "specimens", id), { recursive: true });
  await writeFile(join(library, "specimens", id, "specimen.json"), JSON.stringify(sampleSpecimen(id)));
}

export interface RunningServer {
  readonly child: ChildProcess;
  readonly origin: string;
  readonly token: string;
  /** Everything printed so far. */
  output(): string;
  /** A request with the token; JSON in, JSON out. */
  call<T>(method: string, path: string, body?: unknown): Promise<{ status: number; answer: T }>;
  /** The exit code, once the process has ended. */
  readonly ended: Promise<number | null>;
}

/** Starts the program; resolves once it has printed its address, or has ended. */
export async function startServer({ env }: Place, args: readonly string[] = ["--port", "0"]): Promise<RunningServer> {
  const child = spawn(process.execPath, [SERVER, ...args], { env, stdio: ["ignore", "pipe", "pipe"] });
  const ended = once(child, "exit").then(([code]) => code as number | null);
  let output = "";
  const address = new Promise<RegExpExecArray | null>((resolve) => {
    const hear = (piece: Buffer) => {
      output += piece.toString();
      const found = /(http:\/\/127\.0\.0\.1:\d+)\/#token=(\S+)/.exec(output);
      if (found) resolve(found);
    };
    child.stdout.on("data", hear);
    child.stderr.on("data", hear);
    void ended.then(() => resolve(null));
  });
  const found = await address;
  const origin = found?.[1] ?? "";
  const token = found?.[2] ?? "";
  return {
    child,
    origin,
    token,
    output: () => output,
    ended,
    async call<T>(method: string, path: string, body?: unknown) {
      const response = await fetch(origin + path, {
        method,
        headers: { [TOKEN_HEADER]: token },
        ...(body === undefined ? {} : { body: JSON.stringify(body) }),
      });
      return { status: response.status, answer: (await response.json()) as T };
    },
  };
}
