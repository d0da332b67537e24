// Metadata as the Zarr v3 core and v2 specifications print it; every way of storing that is not read brick by brick has its reason.
import { describe, expect, test } from "vitest";
import { layoutOfArray } from "#shared/volume/store/zarr-layout.ts";
import { seeded } from "#test/shared/tracing/tube-phantom.ts";

const SPACE = ["space", "space", "space"] as const;
const LITTLE = { name: "bytes", configuration: { endian: "little" } };
const v3 = (more: object = {}) => ({
  zarr_format: 3,
  node_type: "array",
  shape: [100, 90, 80],
  data_type: "uint16",
  chunk_grid: { name: "regular", configuration: { chunk_shape: [32, 32, 32] } },
  chunk_key_encoding: { name: "default", configuration: { separator: "/" } },
  fill_value: 0,
  codecs: [LITTLE],
  ...more,
});
const v2 = (more: object = {}) => ({
  zarr_format: 2,
  shape: [100, 90, 80],
  chunks: [32, 32, 32],
  dtype: "<u2",
  compressor: null,
  filters: null,
  order: "C",
  fill_value: 0,
  ...more,
});
const sharded = (more: object = {}, codecs: object[] = [LITTLE]) =>
  v3({
    chunk_grid: { name: "regular", configuration: { chunk_shape: [64, 512, 512] } },
    codecs: [
      {
        name: "sharding_indexed",
        configuration: {
          chunk_shape: [32, 32, 32],
          codecs,
          index_codecs: [LITTLE, { name: "crc32c" }],
          index_location: "end",
          ...more,
        },
      },
    ],
  });
const layout = (metadata: unknown, selection: readonly ("space" | number)[] = SPACE) => {
  const verdict = layoutOfArray(metadata, selection);
  if ("why" in verdict) throw new Error(verdict.why);
  return verdict.array;
};
const why = (metadata: unknown, selection: readonly ("space" | number)[] = SPACE) => {
  const verdict = layoutOfArray(metadata, selection);
  return "why" in verdict ? verdict.why : "it fits";
};

describe("the layout of a Zarr array", () => {
  test("says where chunks lie, by either version and with either separator", () => {
    const array = layout(v3());
    expect([array.shape, array.chunk, array.packing, array.shard, array.fill]).toEqual([
      [100, 90, 80],
      [32, 32, 32],
      "plain",
      null,
      0,
    ]);
    expect(array.path(2, 1, 0)).toBe("c/2/1/0");
    expect(layout(v3({ chunk_key_encoding: { name: "v2" } })).path(2, 1, 0)).toBe("2.1.0");
    expect(layout(v3({ chunk_key_encoding: "default" })).path(2, 1, 0)).toBe("c/2/1/0");
    expect(layout(v2()).path(2, 1, 0)).toBe("2.1.0");
    expect(layout(v2({ dimension_separator: "/" })).path(2, 1, 0)).toBe("2/1/0");
    const five = { shape: [2, 3, 100, 90, 80], chunks: [1, 1, 32, 32, 32] };
    expect(layout(v2(five), [1, 2, ...SPACE]).path(0, 1, 2)).toBe("1.2.0.1.2");
    expect(layout(v2(five), [1, 2, ...SPACE]).shape).toEqual([100, 90, 80]);
  });

  test("knows shards, plain and packed, with the index at either end", () => {
    expect(layout(sharded()).shard).toEqual({ chunks: [2, 16, 16], indexAt: "end", isChecked: true });
    const other = sharded({ index_location: "start", index_codecs: [LITTLE] }, [
      LITTLE,
      { name: "gzip", configuration: { level: 5 } },
    ]);
    expect([layout(other).shard, layout(other).packing]).toEqual([
      { chunks: [2, 16, 16], indexAt: "start", isChecked: false },
      "gzip",
    ]);
  });

  test.each([
    ["no array", { zarr_format: 3, node_type: "group" }, "not that of a Zarr v2 or v3 array"],
    ["no object", [1], "not a JSON object"],
    ["another type", v3({ data_type: "float64" }), "of type 'float64'"],
    ["another type (v2)", v2({ dtype: ">u2" }), "of type '>u2'"],
    ["an irregular grid", v3({ chunk_grid: { name: "rectilinear", configuration: {} } }), "'rectilinear'"],
    ["blosc", v3({ codecs: [LITTLE, { name: "blosc" }] }), "packed with blosc"],
    ["zstd in shards", sharded({}, [LITTLE, { name: "zstd" }]), "packed with zstd"],
    ["another blosc (v2)", v2({ compressor: { id: "blosc", cname: "zstd", shuffle: 1 } }), "packed with blosc (zstd)"],
    [
      "blosc with shuffled bits",
      v2({ compressor: { id: "blosc", cname: "lz4", shuffle: 2 } }),
      "packed with blosc (shuffled bits)",
    ],
    ["filters (v2)", v2({ filters: [{ id: "delta" }] }), "filters"],
    ["column-major (v2)", v2({ order: "F" }), "x-slowest"],
    ["transposed", v3({ codecs: [{ name: "transpose", configuration: { order: [2, 1, 0] } }, LITTLE] }), "another order"],
    ["big-endian", v3({ codecs: [{ name: "bytes", configuration: { endian: "big" } }] }), "big-endian"],
    ["two packings", v3({ codecs: [LITTLE, { name: "gzip" }, { name: "crc32c" }] }), "packed with crc32c"],
    ["no codec", v3({ codecs: [] }), "does not say how"],
    ["shards in shards", sharded({}, [sharded().codecs[0]!]), "packed with sharding_indexed"],
    ["packed shards", v3({ ...sharded(), codecs: [...sharded().codecs, { name: "gzip" }] }), "packed as a whole"],
    ["a packed index", sharded({ index_codecs: [LITTLE, { name: "gzip" }] }), "indices of its shards"],
    ["crooked shards", sharded({ chunk_shape: [30, 32, 32] }), "do not hold whole chunks"],
    [
      "vast shards",
      v3({
        ...sharded({ chunk_shape: [8, 8, 8] }),
        chunk_grid: { name: "regular", configuration: { chunk_shape: [512, 512, 512] } },
      }),
      "more than 65536 chunks",
    ],
    ["slices", v3({ chunk_grid: { name: "regular", configuration: { chunk_shape: [1, 90, 80] } } }), "thinner than 8"],
    [
      "huge chunks",
      v3({ shape: [500, 500, 500], chunk_grid: { name: "regular", configuration: { chunk_shape: [500, 500, 500] } } }),
      "up to 8 MB",
    ],
    ["negative sides", v3({ shape: [-1, 90, 80] }), "not positive whole numbers"],
    ["too few sides", v3({ shape: [90, 80] }), "not positive whole numbers"],
    ["an odd fill", v3({ fill_value: "0x00" }), "fill value"],
  ])("gives the reason for %s", (_, metadata, sentence) => {
    expect(why(metadata)).toContain(sentence);
  });

  test("knows blosc with LZ4 inside, by either version", () => {
    expect(layout(v2({ compressor: { id: "blosc", cname: "lz4", clevel: 5, shuffle: 1, blocksize: 0 } })).packing).toBe("blosc");
    const codec = { name: "blosc", configuration: { cname: "lz4", clevel: 5, shuffle: "shuffle", typesize: 2, blocksize: 0 } };
    expect(layout(v3({ codecs: [LITTLE, codec] })).packing).toBe("blosc");
    expect(layout(sharded({}, [LITTLE, codec])).packing).toBe("blosc");
    // Left to the writer, the bits of one-byte voxels are shuffled, the bytes of others.
    const auto = { compressor: { id: "blosc", cname: "lz4", shuffle: -1 } };
    expect(layout(v2(auto)).packing).toBe("blosc");
    expect(why(v2({ ...auto, dtype: "|u1" }))).toContain("shuffled bits");
  });

  test("a thin array may have thin chunks", () => {
    expect(why(v3({ shape: [3, 90, 80], chunk_grid: { name: "regular", configuration: { chunk_shape: [3, 90, 80] } } }))).toBe(
      "it fits",
    );
  });

  test("mutated metadata gives a layout or a reason, never anything else", () => {
    const random = seeded(5);
    const odd = [null, -1, 1e300, "x", [], {}, true, 2.5, [0], { name: 3 }];
    for (let round = 0; round < 3000; round++) {
      const metadata = JSON.parse(JSON.stringify([v3(), v2(), sharded()][round % 3]));
      let here: Record<string, unknown> = metadata;
      for (;;) {
        const keys = Object.keys(here);
        if (keys.length === 0) break;
        const key = keys[Math.floor(random() * keys.length)]!;
        const next = here[key];
        if (typeof next === "object" && next !== null && random() < 0.6) here = next as Record<string, unknown>;
        else {
          here[key] = odd[Math.floor(random() * odd.length)];
          break;
        }
      }
      const verdict = layoutOfArray(metadata, SPACE);
      if ("why" in verdict) expect(verdict.why).toMatch(/\.$|read$|pieces/);
      else expect(typeof verdict.array.path(0, 0, 0)).toBe("string");
    }
  });
});
