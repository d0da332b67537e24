import { createHash } from "node:crypto";
import { chmod, mkdir, readFile, realpath, rm, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { type HelloAnswer, ROUTES, TOKEN_HEADER } from "#shared/api/routes.ts";

/** How a second start finds the server that has the library open: in the user's private folder, readable by the user alone. */
export interface RunningInstance {
  readonly origin: string;
  readonly token: string;
}

/** Address of the page; the fragment, which no browser sends anywhere, carries the token. */
export function pageUrl({ origin, token }: RunningInstance): string {
  return `${origin}/#token=${token}`;
}

/** Notes that this process serves the library, and a page file that leads a browser there. Undo with {@link forgetInstance}. */
export async function noteInstance(state: string, library: string, instance: RunningInstance): Promise<{ opener: string }> {
  const { note, opener } = await places(state, library);
  await mkdir(state, { recursive: true, mode: 0o700 });
  await writePrivate(note, JSON.stringify(instance));
  // A token on a browser's command line could be read by other users of the computer; in this file it cannot.
  const target = JSON.stringify(pageUrl(instance)).replaceAll("<", "\\u003c");
  await writePrivate(
    opener,
    `<!doctype html><meta charset="utf-8"><title>Tautline</title><script>location.replace(${target})</script>\n`,
  );
  return { opener };
}

/** Removes what {@link noteInstance} wrote. */
export async function forgetInstance(state: string, library: string): Promise<void> {
  const { note, opener } = await places(state, library);
  for (const path of [note, opener]) await rm(path, { force: true });
}

/** The server of our own that has `library` open and answers, with its opener file; null when there is none. */
export async function findInstance(state: string, library: string): Promise<(RunningInstance & { opener: string }) | null> {
  const { note, opener } = await places(state, library);
  try {
    const { origin, token } = JSON.parse(await readFile(note, "utf8")) as RunningInstance;
    if (!/^http:\/\/127\.0\.0\.1:\d+$/.test(origin)) return null;
    const signal = AbortSignal.timeout(3_000);
    const answer = await fetch(`${origin}${ROUTES.hello.path}`, { headers: { [TOKEN_HEADER]: token }, signal });
    const hello = (await answer.json()) as Partial<HelloAnswer>;
    if (hello.name !== "Tautline" || hello.library === undefined) return null;
    return (await realpath(hello.library)) === (await realpath(library)) ? { origin, token, opener } : null;
  } catch {
    return null; // no note, nobody answers, or somebody else does
  }
}

async function places(state: string, library: string): Promise<{ note: string; opener: string }> {
  const real = await realpath(library).catch(() => library);
  const key = createHash("sha256").update(real).digest("hex").slice(0, 16);
  return { note: join(state, `running-${key}.json`), opener: join(state, `open-${key}.html`) };
}

async function writePrivate(path: string, text: string): Promise<void> {
  await rm(path, { force: true });
  await writeFile(path, text, { mode: 0o600, flag: "wx" });
  await chmod(path, 0o600);
}
