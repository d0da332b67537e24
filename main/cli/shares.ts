import { wholeOption } from "#main/cli/number-option.ts";
import type { GatheredShares, Share, SharedVerb, VerbCall, VerbResult } from "#main/cli/verb.ts";
import { TautlineError, unreadable } from "#shared/errors.ts";

/** Options of every verb whose work can be spread. */
export const SHARE_OPTIONS = { jobs: { type: "string" }, shard: { type: "string" } } as const;

/** Their lines in a verb's help. */
export const SHARE_HELP = `  --jobs N                     threads on this machine (1)
  --shard i/n                  only share i of n, as JSON Lines; 'tautline gather' joins the shares of all machines`;

/** First line of a share. */
interface ShareHead {
  readonly share: "tautline";
  readonly verb: string;
  readonly index: number;
  readonly of: number;
  /** Items of the whole work. */
  readonly count: number;
  readonly head: unknown;
}

/** Runs a verb as asked: one share as JSON Lines, or all shares, each in a thread, gathered. */
export async function runShared(verb: SharedVerb, call: VerbCall): Promise<VerbResult> {
  const share = shardOption(call.options);
  const jobs = wholeOption(call.options, "jobs", 1) ?? 1;
  if (share && call.options.jobs !== undefined)
    throw misuse("--jobs and --shard exclude each other: a share runs in one thread.");
  if (share) return { json: null, text: "", exit: 0, lines: await verb.share(call, share) };
  const { positionals, options, io, say } = call;
  const runOne = (index: number) => {
    const part = { index, of: jobs };
    if (!io.runInThread) return verb.share(call, part);
    return io.runInThread({ verb: verb.name, positionals, options, share: part }, say);
  };
  const lines = await Promise.all(Array.from({ length: jobs }, (_, k) => runOne(k + 1)));
  return verb.gather(
    gatherShares(
      lines.flat().map((text, k) => ({ text, where: `line ${k + 1}` })),
      "the shares",
    ),
  );
}

/** The lines of a share: head, for the first share the frame, then its items with their numbers. */
export function shareLines(
  verb: string,
  share: Share,
  head: unknown,
  count: number,
  frame: () => unknown,
  item: (k: number) => unknown,
): string[] {
  const first: ShareHead = { share: "tautline", verb, ...share, count, head };
  const lines = [JSON.stringify(first)];
  if (share.index === 1) lines.push(JSON.stringify({ frame: frame() }));
  for (const k of itemsOf(share, count)) lines.push(JSON.stringify({ item: k, value: item(k) }));
  return lines;
}

/** Numbers of the items of a share: every n-th from its index on. */
export function itemsOf(share: Share, count: number): number[] {
  return Array.from({ length: count }, (_, k) => k).filter((k) => k % share.of === share.index - 1);
}

/** Joins the lines of shares in any order; checks that every share and every item is there once and that all were asked for the same. @throws unreadable-input */
export function gatherShares(lines: readonly { readonly text: string; readonly where: string }[], file: string): GatheredShares {
  let first: ShareHead | undefined;
  let frame: unknown;
  const seen = new Set<number>();
  const items = new Map<number, unknown>();
  for (const { text, where } of lines) {
    if (text.trim() === "") continue;
    const value = parseLine(text, file, where);
    if (value.share === "tautline") {
      const head = value as unknown as ShareHead;
      first ??= head;
      const same =
        head.verb === first.verb &&
        head.of === first.of &&
        head.count === first.count &&
        JSON.stringify(head.head) === JSON.stringify(first.head);
      if (!same)
        throw unreadable(
          file,
          "shares of one work",
          "a share of another work or with other options",
          where,
          "Gather only shares made with the same files and options.",
        );
      if (seen.has(head.index)) throw unreadable(file, "every share once", `share ${head.index} twice`, where);
      seen.add(head.index);
    } else if ("frame" in value) frame = value.frame;
    else if (typeof value.item === "number") {
      if (items.has(value.item)) throw unreadable(file, "every item once", `item ${value.item} twice`, where);
      items.set(value.item, value.value);
    } else throw unreadable(file, "a line of a share", "something else", where, "Give the output of a verb run with --shard.");
  }
  if (!first) throw unreadable(file, "the output of a verb run with --shard", "no share in it");
  const missing = Array.from({ length: first.of }, (_, k) => k + 1).filter((index) => !seen.has(index));
  if (missing.length > 0) throw unreadable(file, `all ${first.of} shares`, `share ${missing.join(", ")} missing`);
  if (items.size !== first.count || frame === undefined)
    throw unreadable(file, `${first.count} items`, `${items.size}`, undefined, "A share was cut short; run it again.");
  return { verb: first.verb, head: first.head, frame, items: Array.from({ length: first.count }, (_, k) => items.get(k)) };
}

function parseLine(text: string, file: string, where: string): Record<string, unknown> {
  try {
    const value: unknown = JSON.parse(text);
    if (typeof value === "object" && value !== null && !Array.isArray(value)) return value as Record<string, unknown>;
  } catch {
    // Told below: not JSON is no line of a share.
  }
  throw unreadable(
    file,
    "a line of JSON from a verb run with --shard",
    text.length > 40 ? `'${text.slice(0, 40)}...'` : `'${text}'`,
    where,
  );
}

function shardOption(options: VerbCall["options"]): Share | undefined {
  if (options.shard === undefined) return undefined;
  const found = /^([1-9]\d{0,5})\/([1-9]\d{0,5})$/.exec(String(options.shard));
  const [index, of] = [Number(found?.[1]), Number(found?.[2])];
  if (!found || index > of) throw misuse(`--shard must be i/n with i from 1 to n, found '${String(options.shard)}'.`);
  return { index, of };
}

function misuse(what: string): TautlineError<"misuse"> {
  return new TautlineError("misuse", what, { what });
}
