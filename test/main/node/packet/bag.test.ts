import { execFileSync, spawnSync } from "node:child_process";
import { mkdir, mkdtemp, readFile, rm, stat, symlink, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { unzipSync, zipSync } from "fflate";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { diskFiles } from "#main/node/disk-files.ts";
import { openBag } from "#main/node/packet/bag-reader.ts";
import { type BagOrder, writeBag } from "#main/node/packet/bag-writer.ts";
import { SigningKey } from "#main/node/packet/signing.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { handMadeBag, putFiles, tagManifest } from "#test/main/node/packet/sample-bag.ts";

// Independent readings: sha256sum (GNU coreutils) over the manifests, unzip (Info-ZIP) and the fflate library over the zips, and
// bags written by hand from the words of RFC 8493.

const PAYLOAD = { "a.txt": "alpha\n", "deep/er/b %.txt": "beta\n", "empty.bin": "" };
const text = (bytes: Uint8Array) => new TextDecoder().decode(bytes);
let folder: string;
let key: SigningKey;

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-bag-"));
  key = new SigningKey(diskFiles(), join(folder, "key.json"), async () => {});
  await writeFile(join(folder, "big.bin"), new Uint8Array(2_500_000).fill(7));
});
afterAll(() => rm(folder, { recursive: true }));

function order(name: string, form: "folder" | "zip", sign = true): BagOrder {
  const inMemory = Object.entries(PAYLOAD).map(([path, content]) => ({ path, bytes: new TextEncoder().encode(content) }));
  const onDisk = { path: "big.bin", file: join(folder, "big.bin"), size: 2_500_000 };
  return {
    name,
    folder,
    form,
    payload: [...inMemory, onDisk],
    info: { "Bag-Software-Agent": "Tautline 0" },
    key: sign ? key : null,
  };
}

const without = (path: string) => (files: Record<string, string>) => {
  delete files[path];
};
const has = (program: string) => spawnSync(program, ["--help"]).error === undefined;

describe("a bag that the program writes", () => {
  it.skipIf(!has("sha256sum"))("is complete and whole by sha256sum (skipped without coreutils)", async () => {
    const { path } = await writeBag(diskFiles(), order("one", "folder"));
    // The one path with a % is percent-encoded in a manifest (RFC 8493 2.1.3); sha256sum does not know that.
    const manifest = (await readFile(join(path, "manifest-sha256.txt"), "utf8")).replace("%25", "%");
    for (const list of [manifest, await readFile(join(path, "tagmanifest-sha256.txt"), "utf8")])
      expect(execFileSync("sha256sum", ["--check", "--strict", "--quiet"], { cwd: path, input: list }).toString()).toBe("");
    expect(manifest.split("\n").filter(Boolean)).toHaveLength(4);
    expect(await readFile(join(path, "bagit.txt"), "utf8")).toBe("BagIt-Version: 1.0\nTag-File-Character-Encoding: UTF-8\n");
    expect(await readFile(join(path, "bag-info.txt"), "utf8")).toContain("Payload-Oxum: 2500011.4\n");
  });

  it("is the same in a zip, read by another library and by unzip", async () => {
    const { path, bytes } = await writeBag(diskFiles(), order("two", "zip", false));
    const zip = await readFile(path);
    expect(bytes).toBe(zip.length);
    const files = unzipSync(zip);
    expect(text(files["two/data/deep/er/b %.txt"]!)).toBe("beta\n");
    expect(Buffer.compare(files["two/data/big.bin"]!, Buffer.alloc(2_500_000, 7))).toBe(0);
    if (has("unzip")) expect(execFileSync("unzip", ["-t", path]).toString()).toContain("No errors detected");
    else console.log("unzip is not here: the zip was read by fflate alone");
    const again = await writeBag(diskFiles(), { ...order("two", "zip", false), folder: await mkdtemp(join(folder, "again-")) });
    expect(Buffer.compare(await readFile(again.path), zip)).toBe(0);
  });

  it.each(["folder", "zip"] as const)("as a %s comes back file by file, with the key that signed it", async (form) => {
    const { path } = await writeBag(diskFiles(), order(`back-${form}`, form));
    const bag = await openBag(diskFiles(), path);
    expect(bag.fingerprint).toBe(await key.fingerprint());
    expect([...bag.payload.keys()]).toEqual(["data/a.txt", "data/big.bin", "data/deep/er/b %.txt", "data/empty.bin"]);
    for (const [inside, content] of Object.entries(PAYLOAD)) expect(text(await bag.read(`data/${inside}`, 100))).toBe(content);
    expect((await bag.read("data/big.bin", 3_000_000)).length).toBe(2_500_000);
    await expect(bag.read("data/big.bin", 1000)).rejects.toThrow(/at most 1000 bytes, found 2500000/);
  });

  it("never takes the place of anything", async () => {
    await writeBag(diskFiles(), order("three", "folder"));
    await expect(writeBag(diskFiles(), order("three", "folder"))).rejects.toMatchObject({ tag: "conflict" });
  });

  it("of the same payload has the same identity in either form, signed or not", async () => {
    const paths = await Promise.all([
      writeBag(diskFiles(), order("four", "folder")),
      writeBag(diskFiles(), order("four", "zip", false)),
    ]);
    const [a, b] = await Promise.all(paths.map(({ path }) => openBag(diskFiles(), path)));
    expect(a!.identity).toBe(b!.identity);
    expect([a!.fingerprint === null, b!.fingerprint]).toEqual([false, null]);
  });
});

describe("a bag made by hand from the standard", () => {
  it("is read, as a folder and in a deflated zip of another library", async () => {
    const files = handMadeBag({ "x/y.txt": "hello", "100%25.txt": "percent" });
    // RFC 8493 2.1.3: a literal % in a path is written %25.
    files["manifest-sha256.txt"] = files["manifest-sha256.txt"]!.replace("100%25", "100%2525");
    files["tagmanifest-sha256.txt"] = tagManifest(files);
    const disk = await putFiles("/stick/bag", files);
    const zipped = zipSync(
      Object.fromEntries(Object.entries(files).map(([path, content]) => [`bag/${path}`, Buffer.from(content)])),
    );
    await disk.create("/stick/bag.zip", zipped);
    for (const path of ["/stick/bag", "/stick/bag.zip"]) {
      const bag = await openBag(disk, path);
      expect(text(await bag.read("data/x/y.txt", 10))).toBe("hello");
      expect(bag.info.labels.get("Source-Organization")).toBe("nobody");
    }
  });

  it.each<[string, (files: Record<string, string>) => void, RegExp]>([
    ["without a declaration", without("bagit.txt"), /the file 'bagit.txt', found none/],
    [
      "of an older version",
      (f) => {
        f["bagit.txt"] = f["bagit.txt"]!.replace("1.0", "0.97");
      },
      /BagIt version 1.0, found version 0.97/,
    ],
    [
      "in another encoding",
      (f) => {
        f["bagit.txt"] = f["bagit.txt"]!.replace("UTF-8", "UTF-16");
      },
      /Tag-File-Character-Encoding: UTF-8/,
    ],
    ["without a manifest", without("manifest-sha256.txt"), /the file 'manifest-sha256.txt', found none/],
    ["without a tag manifest", without("tagmanifest-sha256.txt"), /the file 'tagmanifest-sha256.txt', found none/],
    ["with a payload file missing", without("data/a.txt"), /the file 'data\/a.txt', found none/],
    [
      "with a payload file too much",
      (f) => {
        f["data/more.txt"] = "more";
      },
      /only files that the manifest lists, found 'data\/more.txt'/,
    ],
    [
      "with a file that has no place in it",
      (f) => {
        f["notes.txt"] = "x";
      },
      /only files of the packet, found 'notes.txt'/,
    ],
    [
      "with a manifest changed",
      (f) => {
        f["manifest-sha256.txt"] = f["manifest-sha256.txt"]!.replace("a.txt", "c.txt");
      },
      /manifest-sha256.txt\): expected the SHA-256/,
    ],
    [
      "with a file of another length",
      (f) => {
        f["data/a.txt"] = "longer than before";
      },
      /bytes in 2 files, found/,
    ],
    [
      "with a fetch list",
      (f) => {
        f["fetch.txt"] = "https://example.org/x 1 data/x\n";
      },
      /only files of the packet, found 'fetch.txt'/,
    ],
  ])("is refused %s", async (_, change, sentence) => {
    const files = handMadeBag({ "a.txt": "alpha", "b.txt": "beta" });
    change(files);
    const disk = await putFiles("/stick/bag", files);
    await expect(openBag(disk, "/stick/bag")).rejects.toThrow(sentence);
  });

  it.each<[string, string, RegExp]>([
    ["a file listed twice", "data/a.txt", /every file once, found "data\/a.txt" twice/],
    ["two files that some disks hold for one", "data/A.TXT", /every file once/],
    ["a path that leaves it", "data/../../x", /a path that stays inside the packet/],
    ["a path from the root", "/etc/passwd", /a path that stays inside the packet/],
    ["a path with a backslash", "data\\x", /a path that stays inside the packet/],
    ["a device's name", "data/con.txt", /a path that stays inside the packet/],
    ["a path with a drive", "c:/x", /a path that stays inside the packet/],
    ["an encoded line's end", "data/a%0Ab", /a path that stays inside the packet/],
    ["a file beside the payload", "x.txt", /files below data\//],
  ])("is refused with %s in its manifest", async (_, path, sentence) => {
    const files = handMadeBag({ "a.txt": "alpha" });
    files["manifest-sha256.txt"] += `${"0".repeat(64)}  ${path}\n`;
    files["tagmanifest-sha256.txt"] = tagManifest(files);
    await expect(openBag(await putFiles("/stick/bag", files), "/stick/bag")).rejects.toThrow(sentence);
  });

  it("gives no file whose bytes were changed, and says which", async () => {
    const disk = await putFiles("/stick/bag", { ...handMadeBag({ "a.txt": "alpha" }), "data/a.txt": "alphA" });
    const bag = await openBag(disk, "/stick/bag");
    await expect(bag.read("data/a.txt", 10)).rejects.toThrow(
      /data\/a.txt\): expected the SHA-256 [0-9a-f]{16}..., found [0-9a-f]{16}.../,
    );
    const pieces = bag.pieces("data/a.txt");
    await expect(pieces.next()).rejects.toThrow(/expected the SHA-256/);
  });

  it("with a link in it is refused", async () => {
    const path = join(folder, "linked");
    for (const [inside, content] of Object.entries(handMadeBag({ "a.txt": "alpha" }))) {
      await mkdir(join(path, inside, ".."), { recursive: true });
      await writeFile(join(path, inside), content);
    }
    await rm(join(path, "data", "a.txt"));
    await symlink("/etc/hostname", join(path, "data", "a.txt"));
    await expect(openBag(diskFiles(), path)).rejects.toThrow(/plain files, found a link/);
  });
});

describe("a signature", () => {
  const signed = async (change: (file: Record<string, unknown>) => void) => {
    const files: Record<string, string> = handMadeBag({ "a.txt": "alpha" });
    const made = await key.signatureText(Buffer.from(files["tagmanifest-sha256.txt"]!));
    const value = JSON.parse(made) as Record<string, unknown>;
    change(value);
    files["signature.json"] = JSON.stringify(value);
    return openBag(await putFiles("/stick/bag", files), "/stick/bag");
  };
  it("that fits names its key", async () => {
    expect((await signed(() => {})).fingerprint).toBe(await key.fingerprint());
  });
  it("of other bytes, of another key, or malformed is refused", async () => {
    const other = new SigningKey(diskFiles(), join(folder, "other-key.json"), async () => {});
    const foreign = JSON.parse(await other.signatureText(Buffer.from("x"))) as Record<string, unknown>;
    const fits = /a signature that fits the packet, found one that does not/;
    await expect(
      signed((file) => {
        file.signature = foreign.signature;
      }),
    ).rejects.toThrow(fits);
    await expect(
      signed((file) => {
        file.publicKey = foreign.publicKey;
      }),
    ).rejects.toThrow(fits);
    await expect(
      signed((file) => {
        file.publicKey = "AAAA";
      }),
    ).rejects.toThrow(/a key of 32 bytes/);
    await expect(
      signed((file) => {
        file.algorithm = "none";
      }),
    ).rejects.toThrow(/an Ed25519 signature/);
  });
  it("is made with a key that only its owner can read and that stays the same", async () => {
    const path = join(folder, "own-key.json");
    const make = () => new SigningKey(diskFiles(), path, async () => {});
    const first = await make().fingerprint();
    expect(first).toMatch(/^([0-9a-f]{4} ){15}[0-9a-f]{4}$/);
    expect(await make().fingerprint()).toBe(first);
    const { mode } = await stat(path);
    if (process.platform !== "win32") expect(mode & 0o077).toBe(0);
    await writeFile(path, "{}");
    await expect(make().fingerprint()).rejects.toMatchObject({ tag: "unreadable-input" });
  });
});

describe("a zipped bag whose bytes were changed anywhere", () => {
  it("is refused with a sentence or read unharmed, never crashes and never gives other bytes", async () => {
    const content = { "a.txt": "alpha".repeat(50), "b.txt": "beta" };
    const files = handMadeBag(content);
    const good = zipSync(Object.fromEntries(Object.entries(files).map(([path, c]) => [`bag/${path}`, Buffer.from(c)])));
    let refused = 0;
    for (let seed = 0; seed < 400; seed += 1) {
      const random = new SeededRandom(seed);
      let bytes = good.slice();
      if (seed % 4 === 0) bytes = bytes.slice(0, random.below(bytes.length));
      else for (let k = 0; k < 1 + random.below(3); k += 1) bytes[random.below(bytes.length)] = random.below(256);
      const disk = await putFiles("/stick", { "bag.zip": bytes });
      try {
        const bag = await openBag(disk, "/stick/bag.zip");
        for (const [path, c] of Object.entries(content))
          expect(text(await bag.read(`data/${path}`, 1000)), `seed ${seed}`).toBe(c);
      } catch (error) {
        expect((error as { tag?: string }).tag, `seed ${seed}: ${String(error)}`).toBe("unreadable-input");
        refused += 1;
      }
    }
    expect(refused).toBeGreaterThan(300);
  });
});
