// The independent writer and reader of scan files: itk-wasm.
import { readImageNode, writeImageNode } from "@itk-wasm/image-io";

type Values = Uint8Array | Int8Array | Uint16Array | Int16Array | Uint32Array | Int32Array | Float32Array | Float64Array;

export interface ItkImage {
  readonly size: [number, number, number];
  readonly spacing: [number, number, number];
  readonly origin?: [number, number, number];
  /** Row-major. */
  readonly direction?: number[];
  readonly dtype: string;
  readonly data: Values;
}

export async function writeWithItk(path: string, image: ItkImage, compress: boolean): Promise<void> {
  await writeImageNode(
    {
      imageType: { dimension: 3, componentType: image.dtype, pixelType: "Scalar", components: 1 },
      name: "scan",
      origin: image.origin ?? [0, 0, 0],
      spacing: image.spacing,
      direction: new Float64Array(image.direction ?? [1, 0, 0, 0, 1, 0, 0, 0, 1]),
      size: image.size,
      metadata: new Map(),
      data: image.data,
    } as unknown as Parameters<typeof writeImageNode>[0],
    path,
    { useCompression: compress },
  );
}

export async function readWithItk(
  path: string,
): Promise<{ origin: number[]; spacing: number[]; direction: number[]; data: number[] }> {
  const image = await readImageNode(path);
  return {
    origin: Array.from(image.origin),
    spacing: Array.from(image.spacing),
    direction: Array.from(image.direction as Float64Array),
    data: Array.from(image.data as Uint16Array),
  };
}
