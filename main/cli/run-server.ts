import { spawn } from "node:child_process";
import { randomBytes } from "node:crypto";
import { serverAbilities } from "#main/cli/server-abilities.ts";
import { parseServerOptions, SERVER_HELP, type ServerOptions } from "#main/cli/server-options.ts";
import { memoryLimit } from "#main/engine/memory-plan.ts";
import { createHandler } from "#main/http/handler.ts";
import { findBrowser, hasDisplay, openWindow, windowArguments } from "#main/node/browser-window.ts";
import { findElectronBinary } from "#main/node/electron-binary.ts";
import { serveLoopback } from "#main/node/loopback.ts";
import { type ProgramFiles, programFiles } from "#main/node/program-files.ts";
import { findInstance, forgetInstance, noteInstance, pageUrl, type RunningInstance } from "#main/node/running-instance.ts";
import { libraryFolder, stateFolder } from "#main/node/user-folders.ts";
import { openWorkplace } from "#main/node/workplace.ts";
import { EXIT_OF_TAG, encodeError, isTautlineError } from "#shared/errors.ts";

export interface ServerIo {
  readonly env: Readonly<Record<string, string | undefined>>;
  /** Ctrl-C. */
  readonly signal: AbortSignal;
  readonly say: (line: string) => void;
  readonly complain: (line: string) => void;
}

/** `npm start`: Electron where its binary is, else the page in a browser. Resolves with the exit code once it has ended. */
export async function runServer(args: readonly string[], io: ServerIo): Promise<number> {
  try {
    const options = parseServerOptions(args);
    if (options.help) {
      io.say(SERVER_HELP);
      return 0;
    }
    // Said here, before anything is opened, in whichever shell.
    memoryLimit(options.memory, io.env);
    const program = programFiles(import.meta.url);
    const electron = findElectronBinary(program.root, io.env);
    if (electron && options.open && !options.browser && hasDisplay(io.env))
      return await runElectron(electron, program, options, io);
    return await runLoopback(program, options, electron !== null, io);
  } catch (error) {
    io.complain(isTautlineError(error) ? error.message : `${encodeError(error).message} (${String(error)})`);
    return EXIT_OF_TAG[encodeError(error).tag];
  }
}

async function runElectron(binary: string, program: ProgramFiles, options: ServerOptions, io: ServerIo): Promise<number> {
  const env = {
    ...io.env,
    ...(options.library === undefined ? {} : { TAUTLINE_LIBRARY: libraryFolder(options.library) }),
    ...(options.memory === undefined ? {} : { TAUTLINE_MEMORY: options.memory }),
  };
  const child = spawn(binary, [program.root], { env, stdio: "inherit" });
  const stop = () => child.kill("SIGTERM");
  io.signal.addEventListener("abort", stop);
  return new Promise((resolve, reject) => {
    child.once("error", reject);
    child.once("exit", (code) => resolve(code ?? 0));
  });
}

async function runLoopback(program: ProgramFiles, options: ServerOptions, hasElectron: boolean, io: ServerIo): Promise<number> {
  const root = libraryFolder(options.library, io.env);
  const state = stateFolder(io.env);
  const memoryBytes = memoryLimit(options.memory, io.env);
  const show = (instance: ShownInstance, already: boolean) =>
    showPage(instance, { already, state, hasElectron, open: options.open }, io);
  const ended = new AbortController();
  const onFault = (error: unknown) =>
    io.complain(`A fault of the program: ${error instanceof Error ? error.stack : String(error)}`);
  const workplace = await openWorkplace({
    root,
    shell: "loopback",
    version: program.version,
    page: program.page,
    graceMs: options.graceMs,
    onAllLeft: () => ended.abort(),
    onFault,
    abilities: (library) => serverAbilities(library, memoryBytes),
  }).catch(async (error) => {
    const instance = isTautlineError(error, "held-elsewhere") ? await findInstance(state, root) : null;
    if (!instance) throw error;
    await show(instance, true);
    return null;
  });
  if (!workplace) return 0;
  try {
    const token = randomBytes(32).toString("base64url");
    const loopback = await serveLoopback({
      handlerFor: (access) => createHandler(workplace.ports, { access, onFault }),
      preferredPort: options.port,
      token,
    });
    try {
      const instance = { origin: loopback.origin, token };
      // Where the private folder cannot be written, the page still opens by its address.
      const { opener } = await noteInstance(state, root, instance).catch(() => ({ opener: null }));
      await show({ ...instance, opener }, false);
      await Promise.race([aborted(io.signal), aborted(ended.signal)]);
    } finally {
      await loopback.close();
      await forgetInstance(state, root).catch(() => undefined);
    }
  } finally {
    await workplace.close();
  }
  return 0;
}

interface ShownInstance extends RunningInstance {
  /** The private file that leads a browser to the page; null when it could not be written. */
  readonly opener: string | null;
}

interface Showing {
  readonly already: boolean;
  readonly state: string;
  readonly hasElectron: boolean;
  readonly open: boolean;
}

/** Opens the page where that is possible and says, in one line and the address, what happens instead of what one expects. */
async function showPage(instance: ShownInstance, showing: Showing, io: ServerIo): Promise<void> {
  const url = pageUrl(instance);
  const { opener } = instance;
  const browser = showing.open && opener !== null && hasDisplay(io.env) ? findBrowser(io.env) : null;
  const opened =
    browser !== null && opener !== null && (await openWindow(browser, windowArguments(browser, showing.state, opener, url)));
  const reason = showing.already
    ? "Tautline is already running on this library"
    : showing.hasElectron
      ? "Tautline is running"
      : "The Electron binary is not installed here";
  const byAddress = "open this address in a browser on this computer.";
  const noDisplay = showing.open && !hasDisplay(io.env);
  if (opened) io.say(`${reason}: the page opens in a browser window, served on this computer only.`);
  else io.say(noDisplay ? `${reason} and there is no display: ${byAddress}` : `${reason}: ${byAddress}`);
  io.say(url);
}

function aborted(signal: AbortSignal): Promise<void> {
  return new Promise((resolve) => {
    if (signal.aborted) resolve();
    else signal.addEventListener("abort", () => resolve(), { once: true });
  });
}
