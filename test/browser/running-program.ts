import { type ChildProcess, spawn } from "node:child_process";
import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { type BrowserContext, chromium, type Page } from "playwright-core";
// @ts-expect-error a plain script without types
import { bringBrowser } from "#test/tools/browser.mjs";

/** The program as a person runs it: the built server on a free port, over a library of its own. */
export interface RunningProgram {
  /** The address with its token. */
  readonly url: string;
  readonly folder: string;
  readonly library: string;
  stop(): Promise<void>;
  /** Ends it at once, as a power cut would. */
  kill(): Promise<void>;
}

const ROOT = join(import.meta.dirname, "../..");
/** Another build may be named for work on the tests themselves. */
export const DIST = process.env.TAUTLINE_DIST ?? join(ROOT, "dist");
const START_MS = 30_000;

/**
 * Starts the program. @param folder of an earlier run, to go on in its library; left out, a new one that is removed at the end
 * @param port that page addresses should have; 0 = any free one
 */
export async function startProgram(folder?: string, port = 0): Promise<RunningProgram> {
  const home = folder ?? (await mkdtemp(join(tmpdir(), "tautline-browser-")));
  const library = join(home, "library");
  const server = join(DIST, "main/server.mjs");
  const args = [server, "--port", String(port), "--no-open", "--grace", "600", "--library", library];
  const child = spawn(process.execPath, args, {
    env: { ...process.env, TAUTLINE_STATE: join(home, "state") },
    stdio: ["ignore", "pipe", "pipe"],
  });
  const url = await addressOf(child);
  return {
    url,
    folder: home,
    library,
    kill: () => ended(child, "SIGKILL"),
    stop: async () => {
      await ended(child);
      if (folder === undefined) await rm(home, { recursive: true, force: true });
    },
  };
}

function addressOf(child: ChildProcess): Promise<string> {
  return new Promise((resolve, reject) => {
    let said = "";
    const timer = setTimeout(() => reject(new Error(`no address within ${START_MS} ms; the program said: ${said}`)), START_MS);
    const hear = (chunk: Buffer) => {
      said += chunk.toString();
      const url = /http:\/\/127\.0\.0\.1:\d+\/\S*#\S+/.exec(said)?.[0];
      if (url === undefined) return;
      clearTimeout(timer);
      resolve(url);
    };
    child.stdout!.on("data", hear);
    child.stderr!.on("data", hear);
    child.once("exit", (code) => reject(new Error(`the program ended with ${code}; it said: ${said}`)));
  });
}

function ended(child: ChildProcess, signal: NodeJS.Signals = "SIGTERM"): Promise<void> {
  if (child.exitCode !== null || child.signalCode !== null) return Promise.resolve();
  return new Promise((resolve) => {
    child.once("exit", () => resolve());
    child.kill(signal);
  });
}

export interface OpenPage {
  readonly page: Page;
  readonly context: BrowserContext;
  /** Faults that the page met: uncaught errors and console errors. */
  readonly faults: readonly string[];
  close(): Promise<void>;
}

/** The page in a real browser with a profile of its own. */
export async function openPage(url: string, profile: string, size = { width: 1280, height: 800 }): Promise<OpenPage> {
  const executablePath: string | undefined = bringBrowser();
  if (executablePath === undefined) throw new Error("No Chromium-family browser is installed; see test/tools/browser.mjs.");
  const context = await chromium.launchPersistentContext(profile, {
    executablePath,
    args: ["--no-sandbox"],
    viewport: size,
    acceptDownloads: true,
  });
  const page = context.pages()[0] ?? (await context.newPage());
  const faults: string[] = [];
  page.on("pageerror", (error) => faults.push(String(error)));
  page.on("console", (message) => {
    if (message.type() === "error") faults.push(message.text());
  });
  await page.goto(url);
  return { page, context, faults, close: () => context.close() };
}
