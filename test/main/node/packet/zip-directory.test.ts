import { zipSync } from "fflate";
import { describe, expect, it } from "vitest";
import { openBag } from "#main/node/packet/bag-reader.ts";
import { readZipDirectory } from "#main/node/packet/zip-directory.ts";
import { writeZip } from "#main/node/packet/zip-writer.ts";
import { handMadeBag, putFiles } from "#test/main/node/packet/sample-bag.ts";

// Zips by the fflate library, then changed byte by byte where APPNOTE.TXT 6.3.10 puts the field that is meant.

function bagZip(level: 0 | 6, names: (path: string) => string = (path) => path): Uint8Array {
  const files = handMadeBag({ "aaa.txt": "alpha".repeat(100), "bbb.txt": "beta".repeat(100) });
  return zipSync(Object.fromEntries(Object.entries(files).map(([path, text]) => [names(`bag/${path}`), Buffer.from(text)])), {
    level,
  });
}

const opened = async (bytes: Uint8Array) => openBag(await putFiles("/stick", { "bag.zip": bytes }), "/stick/bag.zip");

/** Places of the directory's headers. */
function headers(bytes: Uint8Array, signature: number): number[] {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  return Array.from({ length: bytes.length - 4 }, (_, at) => at).filter((at) => view.getUint32(at, true) === signature);
}
const central = (bytes: Uint8Array) => headers(bytes, 0x02014b50);

/** The zip with every occurrence of one name written as another of the same length. */
function renamed(bytes: Uint8Array, from: string, to: string): Uint8Array {
  const text = Buffer.from(bytes);
  for (let at = text.indexOf(from); at >= 0; at = text.indexOf(from, at + 1)) text.write(to, at, "latin1");
  return new Uint8Array(text);
}

function changed(bytes: Uint8Array, change: (view: DataView, entries: readonly number[]) => void): Uint8Array {
  const copy = bytes.slice();
  change(new DataView(copy.buffer), central(copy));
  return copy;
}

describe("a zipped packet", () => {
  it("is read stored and deflated", async () => {
    for (const level of [0, 6] as const) expect((await opened(bagZip(level))).payload.size).toBe(2);
  });

  it.each<[string, () => Uint8Array, RegExp]>([
    ["with a path that climbs out", () => renamed(bagZip(0), "bag/data/aaa.txt", "bag/data/../x.tx"), /a path that stays inside/],
    [
      "with a path from the root",
      () => bagZip(0, (path) => (path.includes("aaa") ? "/etc/passwd" : path)),
      /a path that stays inside|one folder/,
    ],
    ["with a backslash in a path", () => renamed(bagZip(0), "bag/data/aaa.txt", "bag/data\\aaa.txt"), /a path that stays inside/],
    [
      "with an entry doubled",
      () => renamed(bagZip(0), "bag/data/bbb.txt", "bag/data/aaa.txt"),
      /every file once, found 'bag\/data\/aaa.txt' twice/,
    ],
    [
      "with two names that some disks hold for one",
      () => renamed(bagZip(0), "bag/data/bbb.txt", "bag/data/AAA.TXT"),
      /every file once/,
    ],
    [
      "with a link",
      () => changed(bagZip(0), (v, at) => v.setUint32(at[0]! + 38, 0o120777 << 16, true)),
      /plain files, found a link/,
    ],
    [
      "with a device",
      () => changed(bagZip(0), (v, at) => v.setUint32(at[0]! + 38, 0o060600 << 16, true)),
      /plain files, found something else/,
    ],
    ["that is encrypted", () => changed(bagZip(0), (v, at) => v.setUint16(at[0]! + 8, 1, true)), /not encrypted/],
    [
      "packed in another way",
      () => changed(bagZip(0), (v, at) => v.setUint16(at[0]! + 10, 12, true)),
      /stored or deflated files, found packing 12/,
    ],
    [
      "whose files share bytes",
      () => changed(bagZip(0), (v, at) => v.setUint32(at[1]! + 42, v.getUint32(at[0]! + 42, true) + 4, true)),
      /files that share bytes|a file's header/,
    ],
    [
      "that claims to expand beyond what deflate can",
      () => changed(bagZip(6), (v, at) => v.setUint32(at[0]! + 24, 0x7fffffff, true)),
      /at most 1100 times/,
    ],
    [
      "whose file is larger than the zip",
      () =>
        changed(bagZip(0), (v, at) => {
          v.setUint32(at[0]! + 20, 0x7fffffff, true);
          v.setUint32(at[0]! + 24, 0x7fffffff, true);
        }),
      /bytes before the directory/,
    ],
    [
      "whose directory lies beyond its end",
      () => changed(bagZip(0), (v) => v.setUint32(v.byteLength - 6, 0x7fffffff, true)),
      /a directory of \d+ bytes before/,
    ],
    [
      "that claims more entries than its directory holds",
      () => changed(bagZip(0), (v) => v.setUint16(v.byteLength - 12, 60000, true)),
      /a directory of 60000 entries/,
    ],
    ["in several pieces", () => changed(bagZip(0), (v) => v.setUint16(v.byteLength - 18, 3, true)), /in one piece/],
    ["cut short", () => bagZip(0).slice(0, 900), /a zip file, found a file without a zip's end/],
    ["that is empty", () => new Uint8Array(0), /found an empty file/],
    [
      "with two folders at the top",
      () => bagZip(0, (path) => (path.includes("aaa") ? `x${path}` : path)),
      /one folder with the packet in it, found 2/,
    ],
  ])("is refused %s", async (_, make, sentence) => {
    await expect(opened(make())).rejects.toThrow(sentence);
    await expect(opened(make())).rejects.toMatchObject({ tag: "unreadable-input" });
  });

  it("whose own header names another file than the directory is refused when it is read", async () => {
    const bytes = bagZip(0).slice();
    const [local] = headers(bytes, 0x04034b50).filter(
      (at) => Buffer.from(bytes.subarray(at + 30, at + 46)).toString() === "bag/data/aaa.txt",
    );
    bytes.set(Buffer.from("bag/data/ccc.txt"), local! + 30);
    const bag = await opened(bytes);
    await expect(bag.read("data/aaa.txt", 1000)).rejects.toThrow(/a file named 'bag\/data\/aaa.txt', found another name/);
  });

  it("that holds fewer or more bytes than it says is refused when it is read", async () => {
    const deflated = bagZip(6);
    for (const by of [-1, 1]) {
      const bytes = changed(deflated, (v, at) => {
        const one = at.find((place) => Buffer.from(deflated.subarray(place + 46, place + 62)).toString() === "bag/data/aaa.txt")!;
        v.setUint32(one + 24, v.getUint32(one + 24, true) + by, true);
      });
      const read = opened(bytes).then((bag) => bag.read("data/aaa.txt", 1000));
      await expect(read).rejects.toThrow(/bytes/);
      await expect(read).rejects.toMatchObject({ tag: "unreadable-input" });
    }
  });
});

describe("a zip beyond 4 GiB", () => {
  it("is written and read with zip64, without being held in memory", async () => {
    const zeros = new Uint8Array(64 * 1024 * 1024);
    const big = 70 * zeros.length;
    /** Only what is not a whole piece of zeros is kept, by its place. */
    const kept = new Map<number, Uint8Array>();
    let at = 0;
    const file = {
      append: async (bytes: Uint8Array) => {
        if (bytes !== zeros) kept.set(at, bytes.slice());
        at += bytes.length;
      },
      sync: async () => {},
      truncate: async () => {},
      close: async () => {},
    };
    const scan = async function* () {
      for (let k = 0; k < 70; k += 1) yield zeros;
    };
    const small = async function* () {
      yield Uint8Array.of(1, 2, 3);
    };
    const size = await writeZip(file, [
      { name: "p/scan", bytes: big, crc32: 5, pieces: scan },
      { name: "p/small", bytes: 3, crc32: 6, pieces: small },
    ]);
    expect(size).toBe(at);
    const read = async (start: number, end: number) => {
      const out = new Uint8Array(end - start);
      for (const [place, bytes] of kept) {
        const [from, to] = [Math.max(place, start), Math.min(place + bytes.length, end)];
        if (from < to) out.set(bytes.subarray(from - place, to - place), from - start);
      }
      return out;
    };
    const [scanEntry, smallEntry] = await readZipDirectory("p.zip", size, read);
    expect(scanEntry).toMatchObject({ name: "p/scan", bytes: big, packedBytes: big, offset: 0, crc32: 5 });
    expect(smallEntry).toMatchObject({ name: "p/small", bytes: 3 });
    expect(smallEntry!.offset).toBeGreaterThan(2 ** 32);
    // APPNOTE 4.4.3.2: 45 is the version that zip64 needs; 4.5.3: extra field 1.
    const view = new DataView((await read(0, 64)).buffer);
    expect([view.getUint16(4, true), view.getUint32(18, true), view.getUint16(36, true), view.getBigUint64(40, true)]).toEqual([
      45,
      0xffffffff,
      1,
      BigInt(big),
    ]);
  });

  it("of more than 65 535 files is read to the last", async () => {
    const parts: Uint8Array[] = [];
    const file = {
      append: async (bytes: Uint8Array) => void parts.push(bytes.slice()),
      sync: async () => {},
      truncate: async () => {},
      close: async () => {},
    };
    const none = async function* () {};
    await writeZip(
      file,
      Array.from({ length: 66_000 }, (_, k) => ({ name: `p/${k}`, bytes: 0, crc32: 0, pieces: none })),
    );
    const bytes = new Uint8Array(Buffer.concat(parts));
    const entries = await readZipDirectory("p.zip", bytes.length, async (start, end) => bytes.subarray(start, end));
    expect(entries).toHaveLength(66_000);
    expect(entries[65_999]!.name).toBe("p/65999");
  });
});
