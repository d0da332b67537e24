import { dirname } from "node:path";
import type { AppendFile, CrashPoint, FileFacts, FilePort, FolderEntry } from "#main/node/file-port.ts";

/** Thrown at the crash point and by everything after it: the process is gone. */
export class Killed extends Error {}

interface Inode {
  bytes: Uint8Array;
  synced: Uint8Array;
}

/**
 * What is left after the stop: `kill` - the process died, the system lives: everything written is there; `power-cut` - nothing
 * unsynced is, neither bytes nor names; `torn` - names are there, and of unsynced bytes only a first part.
 */
export type Stop = "kill" | "power-cut" | "torn";

/** A disk in memory that knows what was synced, can stop at a named crash point and can refuse writes. */
export class UnsyncedFiles implements FilePort {
  #names = new Map<string, Inode>();
  #durable = new Map<string, Inode>();
  #folders = new Set<string>(["/"]);
  #dead = false;
  readonly reached = new Map<CrashPoint, number>();
  /** Stops the nth time this point is reached. */
  stopAt: { readonly point: CrashPoint; readonly nth: number } | null = null;
  /** Bytes that still fit; writes beyond fail with ENOSPC after writing what fits. */
  room = Number.POSITIVE_INFINITY;
  /** Refuses everything that changes the disk, with this code. */
  refuses: string | null = null;
  /** Syncs of files do nothing and say they did: a disk that lies, or a program that forgot to sync. */
  syncLies = false;
  /** Fails syncs of files while true. */
  syncFails = false;

  /** The disk as the next process finds it. */
  afterStop(stop: Stop): UnsyncedFiles {
    const next = new UnsyncedFiles();
    next.#folders = new Set(this.#folders);
    for (const [path, inode] of stop === "power-cut" ? this.#durable : this.#names) {
      const bytes = stop === "kill" ? inode.bytes : stop === "torn" ? torn(inode) : inode.synced;
      const copy = { bytes: bytes.slice(), synced: bytes.slice() };
      next.#names.set(path, copy);
      next.#durable.set(path, copy);
    }
    return next;
  }

  paths(): string[] {
    return [...this.#names.keys()].sort();
  }

  reach(point: CrashPoint): void {
    this.#live();
    const nth = (this.reached.get(point) ?? 0) + 1;
    this.reached.set(point, nth);
    if (this.stopAt?.point !== point || this.stopAt.nth !== nth) return;
    this.#dead = true;
    throw new Killed(`stopped at ${point}, time ${nth}`);
  }

  async read(path: string, start = 0, end?: number): Promise<Uint8Array | undefined> {
    this.#live();
    return this.#names.get(path)?.bytes.slice(start, end);
  }

  async facts(path: string): Promise<FileFacts | undefined> {
    this.#live();
    if (this.#folders.has(path)) return { kind: "folder", bytes: 0 };
    const inode = this.#names.get(path);
    return inode && { kind: "file", bytes: inode.bytes.length };
  }

  async list(folder: string): Promise<FolderEntry[] | undefined> {
    this.#live();
    if (!this.#folders.has(folder)) return undefined;
    const below = (path: string) => dirname(path) === folder && path !== folder;
    const name = (path: string) => path.slice(folder.length + 1);
    return [
      ...[...this.#folders].filter(below).map((path) => ({ name: name(path), folder: true })),
      ...[...this.#names.keys()].filter(below).map((path) => ({ name: name(path), folder: false })),
    ];
  }

  async makeFolder(folder: string): Promise<void> {
    this.#live();
    this.#writable(folder);
    for (let at = folder; at !== "/"; at = dirname(at)) this.#folders.add(at);
  }

  async create(path: string, bytes: Uint8Array): Promise<void> {
    this.#live();
    this.#writable(path);
    if (this.#names.has(path)) throw fault("EEXIST", path);
    if (!this.#folders.has(dirname(path))) throw fault("ENOENT", path);
    const inode = { bytes: new Uint8Array(0), synced: new Uint8Array(0) };
    this.#names.set(path, inode);
    this.#write(inode, bytes, path);
  }

  async syncFile(path: string): Promise<void> {
    this.#live();
    const inode = this.#inode(path);
    if (this.syncFails) throw fault("EIO", path);
    if (!this.syncLies) inode.synced = inode.bytes.slice();
  }

  async syncFolder(folder: string): Promise<void> {
    this.#live();
    const inside = (path: string) => path.startsWith(`${folder}/`);
    for (const path of this.#durable.keys()) if (inside(path) && !this.#names.has(path)) this.#durable.delete(path);
    for (const [path, inode] of this.#names) if (dirname(path) === folder) this.#durable.set(path, inode);
    // A folder that was renamed into this one brings its synced files with it.
    for (const [path, inode] of this.#names) if (inside(path) && this.#moved.has(inode)) this.#durable.set(path, inode);
  }
  readonly #moved = new Set<Inode>();

  async rename(from: string, to: string): Promise<void> {
    this.#live();
    this.#writable(from);
    if (this.#folders.has(from)) {
      for (const folder of [...this.#folders]) {
        if (folder !== from && !folder.startsWith(`${from}/`)) continue;
        this.#folders.delete(folder);
        this.#folders.add(to + folder.slice(from.length));
      }
      for (const [path, inode] of [...this.#names]) {
        if (!path.startsWith(`${from}/`)) continue;
        this.#names.delete(path);
        this.#names.set(to + path.slice(from.length), inode);
        this.#moved.add(inode);
      }
      return;
    }
    const inode = this.#inode(from);
    this.#names.delete(from);
    this.#names.set(to, inode);
  }

  async remove(path: string): Promise<void> {
    this.#live();
    this.#writable(path);
    for (const name of [...this.#names.keys()]) if (name === path || name.startsWith(`${path}/`)) this.#names.delete(name);
    for (const name of [...this.#folders]) if (name === path || name.startsWith(`${path}/`)) this.#folders.delete(name);
  }

  async openAppend(path: string): Promise<AppendFile> {
    this.#live();
    const inode = this.#inode(path);
    return {
      append: async (bytes) => {
        this.#live();
        this.#writable(path);
        this.#write(inode, bytes, path);
      },
      sync: async () => {
        this.#live();
        if (this.syncFails) throw fault("EIO", path);
        if (!this.syncLies) inode.synced = inode.bytes.slice();
      },
      truncate: async (size) => {
        this.#live();
        this.#writable(path);
        inode.bytes = inode.bytes.slice(0, size);
      },
      close: async () => {},
    };
  }

  async freeBytes(): Promise<number> {
    return Math.min(this.room, Number.MAX_SAFE_INTEGER);
  }

  /** Changes a file as somebody outside the program would. */
  tamper(path: string, change: (bytes: Uint8Array) => Uint8Array): void {
    const inode = this.#inode(path);
    inode.bytes = change(inode.bytes);
    inode.synced = inode.bytes.slice();
  }

  #write(inode: Inode, bytes: Uint8Array, path: string): void {
    const fits = bytes.subarray(0, Math.min(bytes.length, this.room));
    this.room -= fits.length;
    const grown = new Uint8Array(inode.bytes.length + fits.length);
    grown.set(inode.bytes);
    grown.set(fits, inode.bytes.length);
    inode.bytes = grown;
    if (fits.length < bytes.length) throw fault("ENOSPC", path);
  }

  #inode(path: string): Inode {
    const inode = this.#names.get(path);
    if (!inode) throw fault("ENOENT", path);
    return inode;
  }

  #writable(path: string): void {
    if (this.refuses !== null) throw fault(this.refuses, path);
  }

  #live(): void {
    if (this.#dead) throw new Killed("the process is gone");
  }
}

function torn({ bytes, synced }: Inode): Uint8Array {
  if (bytes.length <= synced.length) return bytes;
  return bytes.slice(0, synced.length + Math.ceil((bytes.length - synced.length) / 2));
}

function fault(code: string, path: string): Error {
  return Object.assign(new Error(`${code}: ${path}`), { code, path });
}
