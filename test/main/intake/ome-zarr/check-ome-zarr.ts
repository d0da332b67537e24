// The rules of OME-Zarr 0.5 for images (its sections "axes", "coordinateTransformations" and "multiscales", MUST and SHOULD
// alike) and those of Zarr v3 (core from memory; codecs `bytes` and `sharding_indexed`, version 1.0, read).
import { readdir, readFile, stat } from "node:fs/promises";
import { join } from "node:path";

type Json = Record<string, unknown>;

/** Everything in a folder that breaks the rules, one sentence each. */
export async function breachesOfOmeZarr(folder: string): Promise<string[]> {
  const breaches: string[] = [];
  const must = (good: unknown, rule: string) => {
    if (!good) breaches.push(rule);
  };
  const read = async (path: string): Promise<Json> => JSON.parse(await readFile(join(folder, path), "utf8")) as Json;
  const group = await read("zarr.json");
  must(group.zarr_format === 3 && group.node_type === "group", "the root is a Zarr v3 group");
  const ome = (group.attributes as Json | undefined)?.ome as Json | undefined;
  must(ome?.version === "0.5", "'ome' holds the version 0.5");
  const multiscales = ome?.multiscales as Json[] | undefined;
  must(Array.isArray(multiscales) && multiscales.length > 0, "'ome' holds a list of multiscales");
  for (const image of multiscales ?? []) {
    must(image.version === undefined, "the version stands under 'ome', not in a multiscale, since 0.5");
    must(typeof image.name === "string", "a multiscale should have a name");
    must(typeof image.type === "string", "a multiscale should name its way of downscaling");
    must(typeof image.metadata === "object" && image.metadata !== null, "a multiscale should have metadata on its downscaling");
    const axes = image.axes as Json[];
    must(axes.length >= 2 && axes.length <= 5, "2 to 5 axes");
    must(new Set(axes.map((axis) => axis.name)).size === axes.length, "names of axes are unique");
    must(
      axes.every((axis) => ["space", "time", "channel"].includes(String(axis.type))),
      "types of axes are known",
    );
    const spaces = axes.filter((axis) => axis.type === "space");
    must(spaces.length === 2 || spaces.length === 3, "2 or 3 axes of space");
    must(
      axes.slice(-spaces.length).every((axis) => axis.type === "space"),
      "axes of space come last",
    );
    must(spaces.length !== 3 || spaces.map((axis) => axis.name).join("") === "zyx", "three axes of space should be z, y, x");
    const prefixes = "atto centi deci exa femto giga hecto kilo mega micro milli nano peta pico tera yocto yotta zepto zetta";
    const metres = ["", ...prefixes.split(" ")].map((prefix) => `${prefix}meter`);
    const units = [...metres, "angstrom", "foot", "inch", "mile", "parsec", "yard"];
    must(
      spaces.every((axis) => units.includes(String(axis.unit))),
      "units of space are UDUNITS-2 names",
    );
    const datasets = image.datasets as { path: string; coordinateTransformations: Json[] }[];
    must(datasets.length > 0, "at least one dataset");
    let last: number[] | null = null;
    for (const { path, coordinateTransformations: steps } of datasets) {
      must(steps.length === 1 || steps.length === 2, "one or two transformations a dataset");
      must(steps[0]?.type === "scale", "the first transformation is a scale");
      must(steps[1] === undefined || steps[1].type === "translation", "the second transformation is a translation");
      for (const step of steps) {
        const numbers = step[String(step.type)];
        const right = Array.isArray(numbers) && numbers.length === axes.length && numbers.every((n) => Number.isFinite(n));
        must(right, "a transformation has one finite number per axis");
      }
      const array = await read(`${path}/zarr.json`);
      const shape = array.shape as number[];
      must(array.zarr_format === 3 && array.node_type === "array", "a dataset is a Zarr v3 array");
      must(shape.length === axes.length, "an array has as many dimensions as axes");
      const names = array.dimension_names as string[] | undefined;
      must(names?.join() === axes.map((axis) => axis.name).join(), "dimension_names are there and equal the axes' names");
      must(last === null || shape.every((side, k) => side <= last![k]!), "datasets go from the finest to the coarsest");
      last = shape;
      await checkArray(join(folder, path), array, must);
    }
  }
  return breaches;
}

async function checkArray(folder: string, array: Json, must: (good: unknown, rule: string) => void): Promise<void> {
  const shape = array.shape as number[];
  for (const key of ["data_type", "chunk_grid", "chunk_key_encoding", "fill_value", "codecs"])
    must(key in array, `an array has '${key}'`);
  const known = [
    "zarr_format",
    "node_type",
    "shape",
    "data_type",
    "chunk_grid",
    "chunk_key_encoding",
    "fill_value",
    "codecs",
    "attributes",
    "storage_transformers",
    "dimension_names",
  ];
  must(
    Object.keys(array).every((key) => known.includes(key)),
    "an array has no unknown keys",
  );
  const grid = array.chunk_grid as { name: string; configuration: { chunk_shape: number[] } };
  must(grid.name === "regular" && grid.configuration.chunk_shape.length === shape.length, "a regular grid of chunks");
  const key = array.chunk_key_encoding as { name: string; configuration?: { separator?: string } };
  must(key.name === "default" && (key.configuration?.separator ?? "/") === "/", "default chunk keys");
  const codecs = array.codecs as { name: string; configuration: Json }[];
  const sharding = codecs.find((codec) => codec.name === "sharding_indexed");
  must(sharding && codecs.length === 1, "sharding is the only outer codec");
  const voxels = (sharding!.configuration.codecs as { name: string; configuration?: Json }[])[0]!;
  const oneByte = array.data_type === "uint8" || array.data_type === "int8";
  must(
    voxels.name === "bytes" && (oneByte || voxels.configuration?.endian === "little"),
    "the voxels' codec says its byte order",
  );
  const inner = sharding!.configuration.chunk_shape as number[];
  const outer = grid.configuration.chunk_shape;
  must(
    inner.every((side, k) => outer[k]! % side === 0),
    "inner chunks divide their shard evenly",
  );
  must(
    (sharding!.configuration.index_codecs as { name: string }[]).map((codec) => codec.name).join() === "bytes,crc32c",
    "an index of bytes and crc32c",
  );
  // Every shard of the grid is a file c/z/y/x and nothing else is there.
  const expected = new Set<string>();
  for (let z = 0; z * outer[0]! < shape[0]!; z++)
    for (let y = 0; y * outer[1]! < shape[1]!; y++)
      for (let x = 0; x * outer[2]! < shape[2]!; x++) expected.add(`c/${z}/${y}/${x}`);
  const found = new Set<string>();
  for (const name of await readdir(folder, { recursive: true })) {
    const path = String(name);
    if (path !== "zarr.json" && (await stat(join(folder, path))).isFile()) found.add(path);
  }
  must(
    [...expected].every((path) => found.has(path)),
    "every shard is there",
  );
  must(
    [...found].every((path) => expected.has(path)),
    "nothing but shards is there",
  );
}
