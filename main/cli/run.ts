import { parseArgs } from "node:util";
import type { CliIo, Verb } from "#main/cli/verb.ts";
import { EXIT_OF_TAG, encodeError, isTautlineError, TautlineError } from "#shared/errors.ts";

/**
 * Runs one command line and gives its exit code (0 done, 1 a check or gate failed, 2 misuse or unreadable input, 3 could not
 * finish, 130 interrupted). Standard output is empty unless the code is 0 or 1.
 */
export async function run(args: readonly string[], verbs: readonly Verb[], io: CliIo): Promise<number> {
  const [name, ...rest] = args;
  if (name === undefined || name === "help" || name === "--help" || name === "-h") {
    const about = verbs.find((verb) => verb.name === rest[0]);
    io.stdout(about ? `${about.help}\n` : overview(verbs));
    return 0;
  }
  try {
    const verb = verbs.find((candidate) => candidate.name === name);
    if (!verb) throw misuse(`There is no verb '${name}'.`, "'tautline help' lists the verbs.");
    if (rest.includes("--help") || rest.includes("-h")) {
      io.stdout(`${verb.help}\n`);
      return 0;
    }
    const { values, positionals } = parse(verb, rest);
    const result = await verb.run({ positionals, options: values, io, say: (line) => io.stderr(`${line}\n`) });
    if (io.signal.aborted) throw new TautlineError("cancelled", "Interrupted.", { what: verb.name });
    for (const note of result.notes ?? []) io.stderr(`${note}\n`);
    if (result.lines) io.stdout(result.lines.map((line) => `${line}\n`).join(""));
    else if (values.json === true) io.stdout(`${JSON.stringify(result.json)}\n`);
    else io.stdout(result.text.endsWith("\n") ? result.text : `${result.text}\n`);
    return result.exit;
  } catch (error) {
    if (io.signal.aborted) {
      io.stderr("tautline: interrupted.\n");
      return 130;
    }
    if (isTautlineError(error)) {
      io.stderr(`tautline: ${error.message}\n`);
      return EXIT_OF_TAG[error.tag];
    }
    io.stderr(`tautline: ${describeFault(error)}\n`);
    return 3;
  }
}

/** Parses a verb's own words; every unknown or ill-formed option is reported together. */
function parse(verb: Verb, args: readonly string[]) {
  const options: Verb["options"] = { ...verb.options, json: { type: "boolean" } };
  const { tokens } = parseArgs({ args: [...args], options, strict: false, allowPositionals: true, tokens: true });
  const faults: string[] = [];
  const positionals: string[] = [];
  const values: Record<string, string | boolean | (string | boolean)[] | undefined> = {};
  for (const token of tokens) {
    if (token.kind === "positional") positionals.push(token.value);
    if (token.kind !== "option") continue;
    const known = options[token.name];
    if (!known) faults.push(`unknown option ${token.rawName}`);
    else if (known.type === "string" && token.value === undefined) faults.push(`${token.rawName} needs a value`);
    else if (known.type === "boolean" && token.value !== undefined) faults.push(`${token.rawName} takes no value`);
    else if (known.multiple) values[token.name] = [...((values[token.name] as string[] | undefined) ?? []), token.value ?? true];
    else if (values[token.name] !== undefined) faults.push(`${token.rawName} is given twice`);
    else values[token.name] = token.value ?? true;
  }
  const [least, most] = verb.positionals;
  if (positionals.length < least)
    faults.push(`${verb.name} needs ${least} file or folder name${least === 1 ? "" : "s"}, found ${positionals.length}`);
  if (positionals.length > most) faults.push(`'${positionals[most]}' is one name too many`);
  if (faults.length > 0) throw misuse(`${faults.join("; ")}.`, `'tautline help ${verb.name}' shows its use.`);
  return { values, positionals };
}

function misuse(what: string, next: string): TautlineError<"misuse"> {
  return new TautlineError("misuse", `${what} ${next}`, { what, next });
}

function overview(verbs: readonly Verb[]): string {
  const width = Math.max(...verbs.map((verb) => verb.name.length));
  const lines = verbs.map((verb) => `  ${verb.name.padEnd(width)}  ${verb.summary}`);
  return `tautline <verb>: reference trees of chordae tendineae, without a window\n\n${lines.join("\n")}\n\n'tautline help <verb>' shows its use; --json on every verb prints one JSON value.\nResearch use only; not a medical device.\n`;
}

function describeFault(error: unknown): string {
  const code = (error as { code?: unknown } | null)?.code;
  const path = (error as { path?: unknown } | null)?.path;
  if (code === "ENOSPC") return "The disk is full; nothing was left half-written. Free some space and try again.";
  if (typeof code === "string" && typeof path === "string")
    return `${path}: ${code}; the system refused. Check that it exists and may be read or written.`;
  return `${encodeError(error).message} (${error instanceof Error ? error.message : String(error)})`;
}
