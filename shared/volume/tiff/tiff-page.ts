import { unreadable } from "#shared/errors.ts";
import { BYTES_OF_DTYPE, type SourceDtype } from "#shared/volume/dtype.ts";

/** Tags that this program reads. @source TIFF 6.0 */
export const TAG = {
  subfileType: 254,
  width: 256,
  height: 257,
  bits: 258,
  compression: 259,
  photometric: 262,
  fillOrder: 266,
  stripOffsets: 273,
  orientation: 274,
  samples: 277,
  rowsPerStrip: 278,
  stripBytes: 279,
  xResolution: 282,
  yResolution: 283,
  resolutionUnit: 296,
  predictor: 317,
  tileWidth: 322,
  tileHeight: 323,
  tileOffsets: 324,
  tileBytes: 325,
  sampleFormat: 339,
} as const;

export type TiffTag = keyof typeof TAG;
/** Values of a page's tags; a tag that is not there is undefined. */
export type TiffValues = Readonly<Partial<Record<TiffTag, Float64Array>>>;

/** How one page keeps its voxels: blocks (strips or tiles), row by row. */
export interface TiffPage {
  readonly width: number;
  readonly height: number;
  readonly dtype: SourceDtype;
  readonly compression: number;
  readonly predictor: number;
  readonly blockWidth: number;
  readonly blockHeight: number;
  readonly tiled: boolean;
  readonly offsets: Float64Array;
  readonly byteCounts: Float64Array;
}

/** Compressions read: none, LZW, deflate (two numbers), PackBits, zstd. */
export const TIFF_COMPRESSIONS: readonly number[] = [1, 5, 8, 32946, 32773, 50000];

/** True for a page that is a smaller copy or a mask of another one. */
export function isSidePage(values: TiffValues): boolean {
  return ((values.subfileType?.[0] ?? 0) & 0b101) !== 0;
}

/**
 * One page's layout from its tags.
 * @param fileBytes size of the file; every block must lie inside it.
 * @throws unreadable-input for pictures that are no grey values, unknown types and compressions, and blocks outside the file.
 */
export function tiffPage(values: TiffValues, fileBytes: number, file: string, where: string): TiffPage {
  const one = (tag: TiffTag, missing: number) => values[tag]?.[0] ?? missing;
  const fail = (expected: string, found: string, next?: string) => unreadable(file, expected, found, where, next);
  const [width, height] = [one("width", 0), one("height", 0)];
  if (!isSide(width) || !isSide(height)) throw fail("a width and height from 1 to 2147483647", `${width} x ${height}`);
  const samples = one("samples", 1);
  const photometric = one("photometric", 1);
  if (samples !== 1 || photometric > 1) {
    const found = photometric === 3 ? "a colour palette" : `${samples} samples a voxel (photometric ${photometric})`;
    throw fail("one grey value per voxel", found, "Save the scan as grey values.");
  }
  const dtype = dtypeOf(one("bits", 1), one("sampleFormat", 1));
  if (!dtype)
    throw fail("8, 16, 32 or 64 bits of a known kind", `${one("bits", 1)} bits, sample format ${one("sampleFormat", 1)}`);
  const compression = one("compression", 1);
  if (!TIFF_COMPRESSIONS.includes(compression))
    throw fail(
      "no compression, LZW, deflate, PackBits or zstd",
      `compression ${compression}`,
      "Save the scan without compression.",
    );
  if (one("fillOrder", 1) !== 1) throw fail("fill order 1", `${one("fillOrder", 1)}`);
  const predictor = one("predictor", 1);
  if (![1, 2, 3].includes(predictor) || (predictor === 3 && !dtype.startsWith("float")))
    throw fail("predictor 1, 2 or 3", `${predictor}`);
  const tiled = values.tileOffsets !== undefined;
  const blockWidth = tiled ? one("tileWidth", 0) : width;
  const blockHeight = tiled ? one("tileHeight", 0) : Math.min(one("rowsPerStrip", height), height);
  if (!isSide(blockWidth) || !isSide(blockHeight)) throw fail("blocks with positive sides", `${blockWidth} x ${blockHeight}`);
  const blocks = Math.ceil(width / blockWidth) * Math.ceil(height / blockHeight);
  const offsets = tiled ? values.tileOffsets : values.stripOffsets;
  const byteCounts = tiled ? values.tileBytes : values.stripBytes;
  if (offsets?.length !== blocks || byteCounts?.length !== blocks)
    throw fail(`${blocks} blocks with places and lengths`, `${offsets?.length ?? 0} places, ${byteCounts?.length ?? 0} lengths`);
  const page: TiffPage = { width, height, dtype, compression, predictor, blockWidth, blockHeight, tiled, offsets, byteCounts };
  for (let k = 0; k < blocks; k++) {
    if (!(offsets[k]! + byteCounts[k]! <= fileBytes))
      throw fail(`${offsets[k]! + byteCounts[k]!} bytes or more for its voxels`, `a file of ${fileBytes} bytes`, CUT_SHORT);
    const needed = blockRows(page, k) * blockWidth * BYTES_OF_DTYPE[dtype];
    if (compression === 1 && byteCounts[k]! < needed)
      throw fail(`a block of ${needed} bytes`, `${byteCounts[k]} bytes`, CUT_SHORT);
    if (byteCounts[k]! * MOST_EXPANSION[compression]! < needed)
      throw fail(`a block of ${needed} bytes`, `${byteCounts[k]} compressed bytes, which cannot hold them`);
  }
  return page;
}

const CUT_SHORT = "The file was cut short; copy it again.";
/** Bounds of what a byte of each compression can stand for, so that a declared size far beyond the file is found as a lie. */
const MOST_EXPANSION: Readonly<Record<number, number>> = { 1: 1, 5: 3000, 8: 1040, 32946: 1040, 32773: 65, 50000: 40_000 };

/** Rows that block `k` holds: all of a tile, those of a strip that are in the page. */
export function blockRows(page: Pick<TiffPage, "tiled" | "blockHeight" | "height" | "width" | "blockWidth">, k: number): number {
  if (page.tiled) return page.blockHeight;
  return Math.min(page.blockHeight, page.height - k * page.blockHeight);
}

function isSide(value: number): boolean {
  return Number.isSafeInteger(value) && value >= 1 && value < 2 ** 31;
}

function dtypeOf(bits: number, format: number): SourceDtype | null {
  const name = `${format === 1 ? "uint" : format === 2 ? "int" : format === 3 ? "float" : "?"}${bits}`;
  return Object.hasOwn(BYTES_OF_DTYPE, name) ? (name as SourceDtype) : null;
}

/** Voxel size across a page in millimetres and the unit's word; null when the page gives none. @source TIFF 6.0, section 8 */
export function pageResolution(values: TiffValues): { x: number; y: number; unit: "inch" | "cm"; mmPerUnit: number } | null {
  const x = values.xResolution?.[0];
  const y = values.yResolution?.[0];
  const code = values.resolutionUnit?.[0] ?? 2;
  if (x === undefined || y === undefined || !(x > 0 && y > 0 && Number.isFinite(x) && Number.isFinite(y))) return null;
  if (code !== 2 && code !== 3) return null;
  const mmPerUnit = code === 2 ? 25.4 : 10;
  return { x: mmPerUnit / x, y: mmPerUnit / y, unit: code === 2 ? "inch" : "cm", mmPerUnit };
}
