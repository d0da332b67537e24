// A disk for tests that keeps apart what was written and what was synced, and can lose the rest as a power cut does.
import { mkdir, writeFile } from "node:fs/promises";
import { dirname, join } from "node:path";
import { asWriteError, type WriteFiles } from "#main/intake/store/write-files.ts";

interface File {
  bytes: Uint8Array;
  safe: Uint8Array;
}
interface Folder {
  names: Map<string, File | Folder>;
  safe: Map<string, File | Folder>;
}

const isFolder = (node: File | Folder): node is Folder => "names" in node;
const newFolder = (): Folder => ({ names: new Map(), safe: new Map() });

/** The computer stopped: nothing that the program does any more reaches the disk. */
export class Stopped extends Error {}

export class ForgetfulDisk implements WriteFiles {
  readonly root = newFolder();
  /** Bytes that may still be written; ENOSPC beyond. */
  room = Number.POSITIVE_INFINITY;
  /** What `freeBytes` answers. */
  free = Number.MAX_SAFE_INTEGER;
  #off = false;

  /** From now on every access fails. */
  stop(): never {
    this.#off = true;
    throw new Stopped("stopped");
  }

  async makeFolder(path: string): Promise<void> {
    this.#check();
    const parent = this.#folder(dirname(path));
    const name = path.split("/").at(-1)!;
    if (!parent.names.has(name)) parent.names.set(name, newFolder());
  }

  async create(path: string) {
    this.#check();
    const parent = this.#folder(dirname(path));
    const name = path.split("/").at(-1)!;
    if (parent.names.has(name)) throw new Error(`EEXIST ${path}`);
    const file: File = { bytes: new Uint8Array(0), safe: new Uint8Array(0) };
    parent.names.set(name, file);
    let open = true;
    const check = () => {
      this.#check();
      if (!open) throw new Error(`closed ${path}`);
    };
    return {
      write: async (bytes: Uint8Array, at: number) => {
        check();
        const end = Math.max(file.bytes.length, at + bytes.length);
        this.room -= end - file.bytes.length;
        if (this.room < 0) throw asWriteError(path, Object.assign(new Error("no space"), { code: "ENOSPC" }));
        const grown = new Uint8Array(end);
        grown.set(file.bytes);
        grown.set(bytes, at);
        file.bytes = grown;
      },
      read: async (into: Uint8Array, at: number) => {
        check();
        into.set(file.bytes.subarray(at, at + into.length));
      },
      sync: async () => {
        check();
        file.safe = file.bytes.slice();
      },
      close: async () => {
        open = false;
      },
    };
  }

  async rename(from: string, to: string): Promise<void> {
    this.#check();
    const source = this.#folder(dirname(from));
    const node = source.names.get(from.split("/").at(-1)!);
    if (!node) throw new Error(`ENOENT ${from}`);
    source.names.delete(from.split("/").at(-1)!);
    this.#folder(dirname(to)).names.set(to.split("/").at(-1)!, node);
  }

  async syncFolder(path: string): Promise<void> {
    this.#check();
    const folder = this.#folder(path);
    folder.safe = new Map(folder.names);
  }

  async remove(path: string): Promise<void> {
    this.#check();
    try {
      this.#folder(dirname(path)).names.delete(path.split("/").at(-1)!);
    } catch {
      // nothing there is fine
    }
  }

  async freeBytes(): Promise<number> {
    this.#check();
    return this.free;
  }

  /** Paths and bytes of all files: `safe` = what a power cut leaves, else what a killed process leaves. */
  files(safe: boolean): Map<string, Uint8Array> {
    const found = new Map<string, Uint8Array>();
    const walk = (folder: Folder, path: string) => {
      for (const [name, node] of safe ? folder.safe : folder.names)
        if (isFolder(node)) walk(node, `${path}${name}/`);
        else found.set(path + name, safe ? node.safe : node.bytes);
    };
    walk(this.root, "");
    return found;
  }

  /** Puts {@link files} into a real folder. */
  async copyTo(folder: string, safe: boolean): Promise<void> {
    for (const [path, bytes] of this.files(safe)) {
      await mkdir(dirname(join(folder, path)), { recursive: true });
      await writeFile(join(folder, path), bytes);
    }
  }

  #check(): void {
    if (this.#off) throw new Stopped("stopped");
  }

  #folder(path: string): Folder {
    let here = this.root;
    for (const part of path.split("/").filter((p) => p !== "" && p !== ".")) {
      const next = here.names.get(part);
      if (!next || !isFolder(next)) throw new Error(`ENOENT ${path}`);
      here = next;
    }
    return here;
  }
}
