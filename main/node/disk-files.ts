import { lstat, mkdir, open, readdir, rename, rm, statfs, writeFile } from "node:fs/promises";
import { dirname } from "node:path";
import { setTimeout as wait } from "node:timers/promises";
import type { AppendFile, FilePort } from "#main/node/file-port.ts";

/** Codes that a virus scanner or a sync client causes for a moment on some systems. */
const HELD_FOR_A_MOMENT = new Set(["EBUSY", "EPERM", "EACCES"]);
const RENAME_TRIES = 6;

/** The file port over the real disk. */
export function diskFiles(): FilePort {
  return {
    async read(path, start = 0, end) {
      let file: Awaited<ReturnType<typeof open>>;
      try {
        file = await open(path, "r");
      } catch (error) {
        if (isMissing(error)) return undefined;
        throw error;
      }
      try {
        const { size } = await file.stat();
        const bytes = new Uint8Array(Math.max(0, Math.min(end ?? size, size) - start));
        let done = 0;
        while (done < bytes.length) {
          const { bytesRead } = await file.read(bytes, done, bytes.length - done, start + done);
          if (bytesRead === 0) break;
          done += bytesRead;
        }
        return bytes.subarray(0, done);
      } finally {
        await file.close();
      }
    },
    async facts(path) {
      try {
        const found = await lstat(path);
        const kind = found.isFile() ? "file" : found.isDirectory() ? "folder" : found.isSymbolicLink() ? "link" : "other";
        return { kind, bytes: found.size };
      } catch (error) {
        if (isMissing(error)) return undefined;
        throw error;
      }
    },
    async list(folder) {
      try {
        const entries = await readdir(folder, { withFileTypes: true });
        return entries.map((entry) => ({ name: entry.name, folder: entry.isDirectory() }));
      } catch (error) {
        if (isMissing(error)) return undefined;
        throw error;
      }
    },
    async makeFolder(folder) {
      const first = await mkdir(folder, { recursive: true });
      if (first === undefined) return;
      for (let made = folder; made.length >= first.length; made = dirname(made)) await syncFolder(dirname(made));
    },
    create: (path, bytes, secret) => writeFile(path, bytes, { flag: "wx", mode: secret ? 0o600 : 0o666 }),
    async syncFile(path) {
      const file = await open(path, "r+");
      try {
        await file.sync();
      } finally {
        await file.close();
      }
    },
    syncFolder,
    async rename(from, to) {
      for (let tried = 1; ; tried += 1) {
        try {
          return await rename(from, to);
        } catch (error) {
          if (tried === RENAME_TRIES || !HELD_FOR_A_MOMENT.has((error as NodeJS.ErrnoException).code ?? "")) throw error;
          await wait(20 * 2 ** tried);
        }
      }
    },
    remove: (path) => rm(path, { recursive: true, force: true, maxRetries: 3 }),
    openAppend,
    async freeBytes(path) {
      const { bavail, bsize } = await statfs(path);
      return bavail * bsize;
    },
    reach() {},
  };
}

async function openAppend(path: string): Promise<AppendFile> {
  const file = await open(path, "a");
  return {
    async append(bytes) {
      for (let done = 0; done < bytes.length; ) done += (await file.write(bytes, done)).bytesWritten;
    },
    sync: () => file.datasync(),
    truncate: (size) => file.truncate(size),
    close: () => file.close(),
  };
}

/** Some systems cannot open or sync a folder; there a rename is as durable as it gets. */
async function syncFolder(folder: string): Promise<void> {
  let handle: Awaited<ReturnType<typeof open>>;
  try {
    handle = await open(folder, "r");
  } catch (error) {
    if (process.platform === "win32") return;
    throw error;
  }
  try {
    await handle.sync();
  } catch (error) {
    if (!["EINVAL", "EPERM", "ENOTSUP"].includes((error as NodeJS.ErrnoException).code ?? "")) throw error;
  } finally {
    await handle.close();
  }
}

function isMissing(error: unknown): boolean {
  const code = (error as NodeJS.ErrnoException).code;
  return code === "ENOENT" || code === "ENOTDIR";
}
