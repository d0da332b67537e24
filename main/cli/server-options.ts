import { parseArgs } from "node:util";
import { DEFAULT_MEMORY_MB, LEAST_MEMORY_MB } from "#main/engine/memory-plan.ts";
import { TautlineError } from "#shared/errors.ts";

/** The page's storage belongs to its address, port included: a steady port keeps it. */
export const PREFERRED_PORT = 47_113;

export const SERVER_HELP = `npm start [-- options]: opens Tautline on this computer

  --library DIR    folder of the library (else TAUTLINE_LIBRARY, else Documents/Tautline)
  --browser        a browser's window, also where Electron is installed
  --no-open        open no window; print the address only
  --port N         preferred port of the page (${PREFERRED_PORT}; 0 = any free one)
  --memory MB      most memory of the engine (else TAUTLINE_MEMORY, else ${DEFAULT_MEMORY_MB}); at least ${LEAST_MEMORY_MB}
  --grace SECONDS  how long to stay after the last page was closed (10)

Research use only; not a medical device.`;

export interface ServerOptions {
  readonly help: boolean;
  readonly library: string | undefined;
  readonly browser: boolean;
  readonly open: boolean;
  readonly port: number;
  /** As given; see `memoryLimit`. */
  readonly memory: string | undefined;
  readonly graceMs: number;
}

/** The options of `npm start`. @throws misuse with every fault found */
export function parseServerOptions(args: readonly string[]): ServerOptions {
  const options = {
    help: { type: "boolean", short: "h" },
    library: { type: "string" },
    browser: { type: "boolean" },
    "no-open": { type: "boolean" },
    port: { type: "string" },
    grace: { type: "string" },
    memory: { type: "string" },
  } as const;
  const { tokens } = parseArgs({ args: [...args], options, strict: false, allowPositionals: true, tokens: true });
  const faults: string[] = [];
  const given = new Map<string, string | true>();
  for (const token of tokens) {
    if (token.kind === "positional") faults.push(`'${token.value}' is not understood`);
    if (token.kind !== "option") continue;
    const known = options[token.name as keyof typeof options];
    if (!known) faults.push(`unknown option ${token.rawName}`);
    else if ((known.type === "string") !== (token.value !== undefined)) {
      faults.push(`${token.rawName} ${known.type === "string" ? "needs a" : "takes no"} value`);
    } else given.set(token.name, token.value ?? true);
  }
  const numberOf = (name: "port" | "grace", otherwise: number, most: number) => {
    const text = given.get(name);
    if (typeof text !== "string") return otherwise;
    if (!/^\d+$/.test(text) || Number(text) > most)
      faults.push(`--${name} must be a whole number from 0 to ${most}, found '${text}'`);
    return Number(text);
  };
  const port = numberOf("port", PREFERRED_PORT, 65_535);
  const graceMs = numberOf("grace", 10, 86_400) * 1000;
  if (faults.length > 0) {
    const what = `${faults.join("; ")}.`;
    throw new TautlineError("misuse", `${what} 'npm start -- --help' lists the options.`, { what });
  }
  const library = given.get("library");
  const memory = given.get("memory");
  return {
    help: given.has("help"),
    library: typeof library === "string" ? library : undefined,
    browser: given.has("browser"),
    open: !given.has("no-open"),
    port,
    memory: typeof memory === "string" ? memory : undefined,
    graceMs,
  };
}
