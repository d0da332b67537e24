import { readFileSync } from "node:fs";
import { hostname } from "node:os";
import { dirname } from "node:path";
import { setTimeout as wait } from "node:timers/promises";
import { makeFolder, writeFault } from "#main/node/disk-fault.ts";
import type { FilePort } from "#main/node/file-port.ts";
import { createId, type RandomBytes } from "#main/node/layout.ts";
import { TautlineError } from "#shared/errors.ts";

/** A holder that has not renewed for so long is taken for dead where its process cannot be asked. */
export const STALE_AFTER_MS = 120_000;
const RENEW_EVERY_MS = 20_000;
/** Waiting for another process that is just taking the lease. */
const TRIES = 40;
const TRY_EVERY_MS = 50;

/** Who holds the library for writing, as the file in it says. */
export interface LeaseRecord {
  readonly pid: number;
  /** Start of the process in the system's own units, where it tells: tells a process from a later one of the same number. */
  readonly started: string;
  readonly bootId: string;
  readonly host: string;
  /** UTC milliseconds of the last renewal. */
  readonly heartbeat: number;
  readonly nonce: string;
  /** What holds it, in words: the server, the desktop program, or the command line's verb. */
  readonly what: string;
}

/** What the lease needs to know about the system; injected so that tests can play a dead holder. */
export interface ProcessFacts {
  readonly pid: number;
  readonly bootId: string;
  readonly host: string;
  now(): number;
  /** Start of a living process, "" where the system does not tell; null when no such process lives. */
  startedOf(pid: number): string | null;
}

/** The facts of this process on this computer. */
export function processFacts(): ProcessFacts {
  return { pid: process.pid, bootId: readBootId(), host: hostname(), now: Date.now, startedOf };
}

/** The right to write to a library; one process has it at a time. */
export interface Lease {
  readonly nonce: string;
  /** Resolves when the lease is still ours. @throws held-elsewhere */
  check(): Promise<void>;
  /** Gives the lease back; nothing happens when it is not ours any more. */
  release(): Promise<void>;
}

export interface LeaseOptions {
  readonly files: FilePort;
  readonly path: string;
  readonly what: string;
  readonly facts: ProcessFacts;
  readonly random: RandomBytes;
}

/** Takes the lease; a dead holder's is taken over. @throws held-elsewhere with the holder's kind and process number */
export async function takeLease(options: LeaseOptions): Promise<Lease> {
  const { files, path, facts, what } = options;
  const nonce = createId(options.random);
  const mine = (): LeaseRecord => ({
    pid: facts.pid,
    started: facts.startedOf(facts.pid) ?? "",
    bootId: facts.bootId,
    host: facts.host,
    heartbeat: facts.now(),
    nonce,
    what,
  });
  await makeFolder(files, dirname(path));
  await underLock(options, async () => {
    const holder = await readLease(files, path);
    if (holder && isAlive(holder, facts)) throw heldBy(holder);
    await put(files, path, mine(), nonce);
  });
  const timer = setInterval(() => void renew().catch(() => undefined), RENEW_EVERY_MS);
  timer.unref();
  async function renew(): Promise<void> {
    await underLock(options, async () => {
      const holder = await readLease(files, path);
      if (holder?.nonce === nonce) await put(files, path, mine(), nonce);
      else clearInterval(timer);
    });
  }
  return {
    nonce,
    async check() {
      const holder = await readLease(files, path);
      if (holder?.nonce !== nonce) throw heldBy(holder);
    },
    async release() {
      clearInterval(timer);
      await underLock(options, async () => {
        if ((await readLease(files, path))?.nonce === nonce) await files.remove(path);
      });
    },
  };
}

/** The record in a library's lease file; null when there is none, or none that can be read. */
export async function readLease(files: FilePort, path: string): Promise<LeaseRecord | null> {
  const bytes = await files.read(path);
  if (!bytes) return null;
  try {
    const record = JSON.parse(new TextDecoder().decode(bytes)) as Partial<LeaseRecord>;
    const whole = typeof record.pid === "number" && typeof record.nonce === "string" && typeof record.heartbeat === "number";
    return whole ? (record as LeaseRecord) : null;
  } catch {
    return null;
  }
}

/** True when the process that holds the lease still lives, as far as this computer can tell. */
export function isAlive(holder: LeaseRecord, facts: ProcessFacts): boolean {
  const fresh = facts.now() - holder.heartbeat < STALE_AFTER_MS;
  // Another computer (a library on a shared disk) or a system without boot ids: the renewal is all there is to go by.
  if (holder.host !== facts.host) return fresh;
  if (holder.bootId !== facts.bootId) return false;
  const started = facts.startedOf(holder.pid);
  if (started === null) return false;
  if (started !== "" && holder.started !== "") return started === holder.started;
  return fresh;
}

/** The lease file changes only under a folder beside it, whose making is atomic on every system. */
async function underLock(options: LeaseOptions, work: () => Promise<void>): Promise<void> {
  const { files, path } = options;
  const lock = `${path}.lock`;
  for (let tried = 1; ; tried += 1) {
    try {
      await files.create(lock, new TextEncoder().encode(String(options.facts.now())));
      break;
    } catch (error) {
      if ((error as NodeJS.ErrnoException).code !== "EEXIST") throw await writeFault(files, lock, error);
      const since = Number(new TextDecoder().decode((await files.read(lock)) ?? new Uint8Array(0)));
      // Its owner was killed inside; the work under the lock takes milliseconds.
      if (tried > 2 && options.facts.now() - since > 10_000) await files.remove(lock);
      else if (tried === TRIES) throw heldBy(null);
      else await wait(TRY_EVERY_MS);
    }
  }
  try {
    await work();
  } finally {
    await files.remove(lock);
  }
}

async function put(files: FilePort, path: string, record: LeaseRecord, nonce: string): Promise<void> {
  const temporary = `${path}.${nonce}`;
  try {
    await files.remove(temporary);
    await files.create(temporary, new TextEncoder().encode(`${JSON.stringify(record)}\n`));
    await files.rename(temporary, path);
  } catch (error) {
    throw await writeFault(files, path, error, 400);
  }
}

function heldBy(holder: LeaseRecord | null): TautlineError<"held-elsewhere"> {
  const who = holder ? `${holder.what}, process ${holder.pid} on ${holder.host}` : "another process";
  return new TautlineError("held-elsewhere", `The library is open in another place for writing (${who}). Close it there first.`, {
    what: "library",
    holder: who,
  });
}

function readBootId(): string {
  try {
    return readFileSync("/proc/sys/kernel/random/boot_id", "utf8").trim();
  } catch {
    return "";
  }
}

function startedOf(pid: number): string | null {
  try {
    process.kill(pid, 0);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === "ESRCH") return null;
  }
  try {
    // Field 22, counted after the command's closing bracket, which may itself hold spaces and brackets.
    const stat = readFileSync(`/proc/${pid}/stat`, "utf8");
    return stat.slice(stat.lastIndexOf(")") + 2).split(" ")[19] ?? "";
  } catch {
    return "";
  }
}
