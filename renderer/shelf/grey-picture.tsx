import { useEffect, useRef } from "preact/hooks";

export interface GreyPictureProps {
  readonly width: number;
  readonly height: number;
  /** uint8, rows from the top. */
  readonly grey: Uint8Array;
  readonly label: string;
  readonly mirrored?: boolean;
  readonly class?: string;
}

/** A grey picture as the page shows it; its box keeps the picture's shape. */
export function GreyPicture({ width, height, grey, label, mirrored = false, ...rest }: GreyPictureProps) {
  const canvas = useRef<HTMLCanvasElement>(null);
  useEffect(() => {
    const to = canvas.current?.getContext("2d");
    if (!to || width < 1 || height < 1) return;
    const pixels = to.createImageData(width, height);
    const words = new Uint32Array(pixels.data.buffer);
    for (let i = 0; i < words.length; i++) {
      const from = mirrored ? i - (i % width) + (width - 1 - (i % width)) : i;
      words[i] = (grey[from]! * 0x010101) | 0xff000000;
    }
    to.putImageData(pixels, 0, 0);
  }, [width, height, grey, mirrored]);
  return <canvas ref={canvas} width={width} height={height} role="img" aria-label={label} {...rest} />;
}
