import { spawn } from "node:child_process";
import { once } from "node:events";
import { mkdtemp, readdir, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, describe, expect, it } from "vitest";
import { diskFiles } from "#main/node/disk-files.ts";
import {
  isAlive,
  type Lease,
  type LeaseRecord,
  type ProcessFacts,
  processFacts,
  readLease,
  takeLease,
} from "#main/node/lease.ts";
import { countingBytes } from "#test/main/node/sample-log.ts";

const folders: string[] = [];
const leases: Lease[] = [];
afterEach(async () => {
  for (const lease of leases.splice(0)) await lease.release();
  for (const folder of folders.splice(0)) await rm(folder, { recursive: true });
});

async function place(): Promise<string> {
  const folder = await mkdtemp(join(tmpdir(), "tautline-lease-"));
  folders.push(folder);
  return join(folder, "lease.json");
}

const random = countingBytes();
async function take(path: string, facts: ProcessFacts, what = "server"): Promise<Lease> {
  const lease = await takeLease({ files: diskFiles(), path, what, facts, random });
  leases.push(lease);
  return lease;
}

const player = (change: Partial<ProcessFacts>): ProcessFacts => ({
  pid: 100,
  bootId: "boot-a",
  host: "desk",
  now: () => 1_000_000,
  startedOf: () => "77",
  ...change,
});

describe("the lease on a library", () => {
  it("is one process's at a time, and free again when it was released", async () => {
    const path = await place();
    const first = await take(path, player({}));
    await expect(take(path, player({ pid: 101 }), "intake")).rejects.toMatchObject({ tag: "held-elsewhere" });
    await expect(take(path, player({ pid: 101 }))).rejects.toThrow(/server, process 100 on desk/);
    await first.check();
    await first.release();
    const second = await take(path, player({ pid: 101 }));
    await second.check();
    await expect(first.check()).rejects.toMatchObject({ tag: "held-elsewhere" });
    await first.release();
    await second.check();
  });

  it("is taken over when the holder's process, or the system it ran in, is gone", async () => {
    for (const gone of [
      player({ pid: 101, startedOf: (pid) => (pid === 100 ? null : "78") }),
      player({ pid: 101, startedOf: (pid) => (pid === 100 ? "9999" : "78") }),
      player({ pid: 101, bootId: "boot-b" }),
    ]) {
      const path = await place();
      const dead = await take(path, player({}));
      const next = await take(path, gone);
      await next.check();
      await expect(dead.check()).rejects.toMatchObject({ tag: "held-elsewhere" });
    }
  });

  it("goes by the renewal alone where the holder's process cannot be asked", () => {
    const record: LeaseRecord = {
      pid: 100,
      started: "",
      bootId: "boot-a",
      host: "other",
      heartbeat: 0,
      nonce: "n",
      what: "server",
    };
    expect(isAlive(record, player({ now: () => 119_000 }))).toBe(true);
    expect(isAlive(record, player({ now: () => 121_000 }))).toBe(false);
    expect(isAlive({ ...record, host: "desk" }, player({ now: () => 119_000, startedOf: () => "" }))).toBe(true);
    expect(isAlive({ ...record, host: "desk" }, player({ now: () => 121_000, startedOf: () => "" }))).toBe(false);
    // A computer that slept has an old renewal, but its process lives.
    expect(isAlive({ ...record, host: "desk", started: "77" }, player({ now: () => 9e9 }))).toBe(true);
  });

  it("goes to exactly one of many that ask at once for a dead holder's", async () => {
    const path = await place();
    await take(path, player({ bootId: "boot-old" }));
    const asked = await Promise.allSettled(
      Array.from({ length: 8 }, (_, i) => take(path, player({ pid: 200 + i, bootId: "boot-new", startedOf: () => "1" }))),
    );
    expect(asked.filter(({ status }) => status === "fulfilled")).toHaveLength(1);
    expect(await readdir(join(path, ".."))).toEqual(["lease.json"]);
  });

  it("of a killed process of this computer is taken over, of a living one it is not", async () => {
    const path = await place();
    const child = spawn(process.execPath, ["-e", "setInterval(() => {}, 1000)"]);
    await once(child, "spawn");
    const facts = processFacts();
    await take(path, { ...facts, pid: child.pid! });
    await expect(take(path, facts)).rejects.toMatchObject({ tag: "held-elsewhere" });
    child.kill("SIGKILL");
    await once(child, "exit");
    await (await take(path, facts)).check();
    expect((await readLease(diskFiles(), path))?.pid).toBe(process.pid);
  });
});
