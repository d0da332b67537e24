import { useMemo } from "preact/hooks";
import { Histogram } from "#renderer/shelf/add-scan/histogram.tsx";
import type { HandednessChoice } from "#renderer/shelf/add-scan/scan-draft.ts";
import { GreyPicture } from "#renderer/shelf/grey-picture.tsx";
import { bytesWords, voxelsWords } from "#renderer/shelf/words.ts";
import type { ScanLookAnswer } from "#shared/api/routes.ts";

/** Bytes of base64 text. */
export function bytesOfBase64(text: string): Uint8Array {
  return Uint8Array.from(atob(text), (letter) => letter.charCodeAt(0));
}

/** The middle slice, the histogram, and what the header says. */
export function ScanLook({ look, handedness }: { readonly look: ScanLookAnswer; readonly handedness: HandednessChoice }) {
  const { info, slice } = look;
  const grey = useMemo(() => bytesOfBase64(slice.data), [slice.data]);
  const mirrored = handedness === "mirrored";
  const said =
    info.headerSpacing === null
      ? "no voxel size"
      : `${info.headerSpacing.map((value) => String(Number(value.toPrecision(7)))).join(" × ")} ${info.unit ?? "without a unit"}`;
  return (
    <section class="scan-look" aria-label="What the file holds">
      <GreyPicture
        class="scan-slice"
        width={slice.width}
        height={slice.height}
        grey={grey}
        mirrored={mirrored}
        label={mirrored ? "Middle slice, turned into its mirror image" : "Middle slice"}
      />
      <p class="soft">Middle slice{mirrored ? ", mirrored as it will be taken in" : ", as the file has it"}</p>
      <Histogram {...look.histogram} />
      <dl class="scan-header">
        <dt>File</dt>
        <dd>
          {info.name}, {bytesWords(info.bytes)}
        </dd>
        <dt>Family</dt>
        <dd>
          {info.family}, {info.dtype}
        </dd>
        <dt>Size</dt>
        <dd>{voxelsWords(info.size)}</dd>
        <dt>Header says</dt>
        <dd>{said}</dd>
        <dt>Frame</dt>
        <dd>{info.frame === "LPS" ? "patient frame (LPS)" : "the scan's own axes"}</dd>
      </dl>
      {look.conversions.map((sentence) => (
        <p key={sentence} class="scan-conversion">
          {sentence}
        </p>
      ))}
    </section>
  );
}
