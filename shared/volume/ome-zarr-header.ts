import { unreadable } from "#shared/errors.ts";
import { sizeXyz, type Vec3 } from "#shared/geometry/types.ts";
import type { SourceDtype } from "#shared/volume/dtype.ts";
import { mmPerUnit } from "#shared/volume/length-unit.ts";
import { PLACELESS, type ScanHeader } from "#shared/volume/scan-header.ts";

interface Axis {
  readonly name: string;
  readonly type: string;
  readonly unit: string | null;
}

/** The finest level of an OME-Zarr image, its transformations put together. */
export interface OmeZarrImage {
  readonly version: "0.4" | "0.5";
  /** Path of the finest level's array under the group. */
  readonly path: string;
  readonly axes: readonly Axis[];
  /** Per axis, as written (dataset, then multiscale); null when no scale is given. */
  readonly scale: readonly number[] | null;
  /** Per axis, in the axis's unit; the centre of the first voxel. */
  readonly translation: readonly number[];
}

type Json = Record<string, unknown>;
const isObject = (value: unknown): value is Json => typeof value === "object" && value !== null && !Array.isArray(value);

/**
 * The first multiscale image that a group's attributes describe: `ome.multiscales` (0.5) or `multiscales` (0.4).
 * @throws unreadable-input when there is none or it breaks the rules this reader depends on.
 * @source OME-Zarr 0.4 and 0.5, "multiscales" and "coordinateTransformations"; a translation moves voxel centres.
 */
export function parseOmeZarr(attributes: unknown, file: string): OmeZarrImage {
  const fail = (expected: string, found: string, where?: string) => unreadable(file, expected, found, where);
  const root = isObject(attributes) ? attributes : {};
  const newer = isObject(root.ome) ? root.ome : null;
  const multiscales = newer ? newer.multiscales : root.multiscales;
  if (!Array.isArray(multiscales) || !isObject(multiscales[0]))
    throw fail("an OME-Zarr image ('multiscales' in the group's attributes)", "none");
  const image = multiscales[0];
  const version = String(newer ? newer.version : (image.version ?? "0.4"));
  if (version !== (newer ? "0.5" : "0.4"))
    throw fail("OME-Zarr version 0.4 or 0.5", `version ${version.slice(0, 20)}`, "multiscales");
  if (!Array.isArray(image.axes) || image.axes.length < 2 || image.axes.length > 5)
    throw fail("2 to 5 axes", "another list", "axes");
  const axes = image.axes.map((axis: unknown): Axis => {
    if (!isObject(axis) || typeof axis.name !== "string") throw fail("axes with a name each", "another entry", "axes");
    const unit = typeof axis.unit === "string" && axis.unit !== "" ? axis.unit : null;
    return { name: axis.name, type: typeof axis.type === "string" ? axis.type : "", unit };
  });
  const first: unknown = Array.isArray(image.datasets) ? image.datasets[0] : undefined;
  if (!isObject(first) || typeof first.path !== "string") throw fail("a list of datasets with paths", "none", "datasets");
  const path = first.path;
  if (path.startsWith("/") || path.includes("\\") || path.split("/").some((part) => part === "" || part === ".."))
    throw fail("a dataset path inside the group", `'${path.slice(0, 40)}'`, "datasets");
  const inner = readTransforms(first.coordinateTransformations, axes.length, file);
  const outer = readTransforms(image.coordinateTransformations, axes.length, file);
  const scale = inner.scale ? inner.scale.map((s, k) => s * (outer.scale?.[k] ?? 1)) : outer.scale;
  const translation = axes.map((_, k) => (inner.translation?.[k] ?? 0) * (outer.scale?.[k] ?? 1) + (outer.translation?.[k] ?? 0));
  return { version: newer ? "0.5" : "0.4", path, axes, scale, translation };
}

/** One scale, then at most one translation, each with a number per axis. */
function readTransforms(value: unknown, count: number, file: string): { scale: number[] | null; translation: number[] | null } {
  let scale: number[] | null = null;
  let translation: number[] | null = null;
  if (value === undefined) return { scale, translation };
  const where = "coordinateTransformations";
  if (!Array.isArray(value)) throw unreadable(file, "a list of transformations", typeof value, where);
  for (const step of value) {
    const kind = isObject(step) ? step.type : undefined;
    const numbers = isObject(step) ? (kind === "scale" ? step.scale : kind === "translation" ? step.translation : null) : null;
    if (kind === "identity") continue;
    if (!Array.isArray(numbers) || numbers.length !== count || !numbers.every((n) => typeof n === "number"))
      throw unreadable(file, `a scale or translation of ${count} numbers`, String(kind).slice(0, 40), where);
    if (kind === "scale" && !scale && !translation) scale = numbers;
    else if (kind === "translation" && !translation) translation = numbers;
    else throw unreadable(file, "one scale, then at most one translation", "another order", where);
  }
  return { scale, translation };
}

/** How a scan lies in an array of two to five axes: which of them are space, and the fixed index of each other one. */
export interface OmeZarrScan {
  readonly header: ScanHeader;
  /** Per array axis: `space`, or the one index that is read. */
  readonly selection: readonly ("space" | number)[];
}

/**
 * The scan inside an OME-Zarr image.
 * @param shape of the finest level's array, in the order of its axes.
 * @param choice which channel and time point, from 0; needed where there is more than one, unless the first will do.
 * @throws unreadable-input when there are not three axes of space in the order z, y, x, or a choice is missing or out of range.
 */
export function scanOfOmeZarr(
  image: OmeZarrImage,
  shape: readonly number[],
  dtype: SourceDtype,
  choice: { readonly channel?: number; readonly time?: number; readonly orFirst?: boolean },
  file: string,
): OmeZarrScan {
  if (shape.length !== image.axes.length)
    throw unreadable(file, `an array of ${image.axes.length} axes`, `${shape.length}`, image.path);
  if (!shape.every((side) => Number.isSafeInteger(side) && side >= 1 && side < 2 ** 31))
    throw unreadable(file, "sides from 1 to 2147483647", shape.join(" x "), image.path);
  const isSpace = (axis: Axis) => axis.type === "space" || (axis.type === "" && /^[xyz]$/i.test(axis.name));
  const space = image.axes.flatMap((axis, k) => (isSpace(axis) ? [k] : []));
  const names = space.map((k) => image.axes[k]!.name).join(", ");
  if (names.toLowerCase() !== "z, y, x") throw unreadable(file, "axes of space z, y, x in this order", names || "none", "axes");
  const selection = image.axes.map((axis, k): "space" | number => {
    if (space.includes(k)) return "space";
    const kind = axis.type === "time" ? "time" : "channel";
    const chosen = choice[kind] ?? (shape[k] === 1 || choice.orFirst ? 0 : undefined);
    if (chosen === undefined || chosen < 0 || chosen >= shape[k]!) {
      const found = chosen === undefined ? `${shape[k]} (axis '${axis.name}')` : `number ${chosen} of ${shape[k]}`;
      const next = `Choose one with --${kind} 0 to ${shape[k]! - 1}.`;
      throw unreadable(file, kind === "time" ? "one time point" : "one channel", found, "axes", next);
    }
    return chosen;
  });
  const most = (time: boolean) =>
    image.axes.reduce((n, axis, k) => (space.includes(k) || (axis.type === "time") !== time ? n : Math.max(n, shape[k]!)), 1);
  const readings = { channels: most(false), times: most(true) };
  const [z, y, x] = space as [number, number, number];
  const pick = (values: readonly number[]): Vec3 => [values[x]!, values[y]!, values[z]!];
  const units = [x, y, z].map((k) => image.axes[k]!.unit);
  const factors = units.map(mmPerUnit);
  const mm = factors.every((f) => f !== null) ? (factors as unknown as Vec3) : null;
  const distinct = [...new Set(units.filter((unit) => unit !== null))];
  const header: ScanHeader = {
    ...PLACELESS,
    family: "OME-Zarr",
    dtype,
    size: sizeXyz(...pick(shape)),
    headerSpacing: image.scale ? pick(image.scale) : null,
    unit: distinct.length === 0 ? null : distinct.join(", ").slice(0, 80),
    mmPerUnit: mm,
    origin: pick(image.translation).every(Number.isFinite) ? pick(image.translation) : [0, 0, 0],
    originMmPerUnit: mm,
    ...(readings.channels > 1 || readings.times > 1 ? { readings } : {}),
  };
  return { header, selection };
}
