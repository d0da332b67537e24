import { useMemo, useRef } from "preact/hooks";
import { dragged, type FlatBox, type Grip, gripAt } from "#renderer/shelf/add-scan/box-drag.ts";
import { bytesOfBase64 } from "#renderer/shelf/add-scan/scan-look.tsx";
import { GreyPicture } from "#renderer/shelf/grey-picture.tsx";
import type { ProjectionPicture } from "#shared/api/projections.ts";

export interface BoxPictureProps {
  readonly picture: ProjectionPicture;
  /** Names of the axes across and down. */
  readonly axes: readonly [string, string];
  /** Voxels across and down. */
  readonly sides: readonly [number, number];
  /** Page pixels across and down. */
  readonly pixels: readonly [number, number];
  /** Null while the typed edges make no box. */
  readonly box: FlatBox | null;
  readonly change: (box: FlatBox) => void;
}

/** Page pixels around an edge from which it can be held. */
const REACH = 9;

/** One projection with the box drawn over it; the pointer draws a new box, moves it, or holds its sides and corners. */
export function BoxPicture({ picture, axes, sides, pixels, box, change }: BoxPictureProps) {
  const grey = useMemo(() => bytesOfBase64(picture.data), [picture.data]);
  const held = useRef<{ grip: Grip; box: FlatBox; from: [number, number] } | null>(null);
  const place = (event: PointerEvent): [number, number] => {
    const frame = (event.currentTarget as Element).getBoundingClientRect();
    return [((event.clientX - frame.left) / frame.width) * sides[0], ((event.clientY - frame.top) / frame.height) * sides[1]];
  };
  const start = (event: PointerEvent) => {
    if (event.button !== 0) return;
    const from = place(event);
    const whole: FlatBox = [0, 0, sides[0], sides[1]];
    const reach: [number, number] = [(REACH * sides[0]) / pixels[0], (REACH * sides[1]) / pixels[1]];
    // A box that is the whole picture could only be moved nowhere: inside it a new one is drawn.
    const grip = box === null ? "new" : gripAt(box, from, reach);
    const isWhole = box?.every((edge, k) => edge === whole[k]);
    held.current = { grip: grip === "all" && isWhole ? "new" : grip, box: box ?? whole, from };
    (event.currentTarget as Element).setPointerCapture(event.pointerId);
    event.preventDefault();
  };
  const move = (event: PointerEvent) => {
    const { current } = held;
    if (current) change(dragged(current.box, current.grip, current.from, place(event), sides));
  };
  const [wide, high] = pixels;
  const across = (voxel: number) => (voxel / sides[0]) * wide;
  const down = (voxel: number) => (voxel / sides[1]) * high;
  const [left, top, right, bottom] = box === null ? [0, 0, 0, 0] : [across(box[0]), down(box[1]), across(box[2]), down(box[3])];
  const words = box === null ? "no box" : `box ${axes[0]} ${box[0]} to ${box[2]}, ${axes[1]} ${box[1]} to ${box[3]}`;
  return (
    <figure class="part-picture" style={{ width: `${wide}px` }}>
      <div class="part-frame" style={{ width: `${wide}px`, height: `${high}px` }}>
        <GreyPicture
          width={picture.width}
          height={picture.height}
          grey={grey}
          label={`The scan with ${axes[0]} to the right and ${axes[1]} downwards; ${words}`}
        />
        <svg
          viewBox={`0 0 ${wide} ${high}`}
          aria-hidden="true"
          onPointerDown={start}
          onPointerMove={move}
          onPointerUp={() => {
            held.current = null;
          }}
          onPointerCancel={() => {
            held.current = null;
          }}
        >
          {box === null ? null : (
            <>
              <path
                class="part-out"
                fill-rule="evenodd"
                d={`M 0 0 H ${wide} V ${high} H 0 Z M ${left} ${top} H ${right} V ${bottom} H ${left} Z`}
              />
              <rect class="part-halo" x={left} y={top} width={right - left} height={bottom - top} />
              <rect class="part-box" x={left} y={top} width={right - left} height={bottom - top} />
            </>
          )}
        </svg>
      </div>
      <figcaption class="soft">
        {axes[0]} →, {axes[1]} ↓
      </figcaption>
    </figure>
  );
}
