import { useEffect, useRef, useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import type { Client } from "#renderer/client/client.ts";
import { mirroredPoints, scanBounds } from "#renderer/space/scan-bounds.ts";
import { SpaceView } from "#renderer/space/space-view.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { normalise } from "#shared/geometry/vec3.ts";

export interface HandednessSheetProps {
  readonly client: Pick<Client, "surface">;
  readonly specimen: SpecimenRecord;
  /** Writes the confirmation; rejects with a sentence when that fails. */
  readonly confirm: () => Promise<void>;
  readonly close: () => void;
}

/** Enough to know a valve by, few enough to turn without a graphics card. */
const SURFACE_POINTS = 20_000;

/** Confirming that a scan is no mirror image: a look at it in space, a switch to its mirror image, and what follows from each. */
export function HandednessSheet({ client, specimen, confirm, close }: HandednessSheetProps) {
  const [mirrored, setMirrored] = useState(false);
  const [busy, setBusy] = useState(false);
  const [failure, setFailure] = useState<string | null>(null);
  const go = async () => {
    setBusy(true);
    try {
      await confirm();
    } catch (error) {
      setFailure(error instanceof Error ? error.message : String(error));
      setBusy(false);
    }
  };
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Leave it open
      </button>
      <button type="button" class="button main" disabled={mirrored || busy} onClick={() => void go()}>
        Confirm: right as it is
      </button>
    </>
  );
  return (
    <Sheet title={`Handedness of ${specimen.name}`} close={close} foot={foot} kind="scan-sheet">
      <div class="shelf-handedness">
        <LookInSpace client={client} specimen={specimen} mirrored={mirrored} />
        <div>
          <p>
            When slices were written in reversed order, the valve is its mirror image and the two papillary muscles trade places.
            A flat picture cannot show it: turn the scan by dragging or with the arrow keys, and compare it with the specimen or
            photographs of it.
          </p>
          <label class="scan-choice">
            <input type="checkbox" checked={mirrored} onChange={(event) => setMirrored(event.currentTarget.checked)} />
            <span>Show the mirror image</span>
          </label>
          <p class={mirrored ? "" : "soft"}>
            If the mirror image is the right one, take the scan in again and choose “mirrored” there: trees already traced lie on
            the scan as it is.
          </p>
          {failure === null ? null : (
            <p class="warn" role="alert">
              {failure}
            </p>
          )}
        </div>
      </div>
    </Sheet>
  );
}

/** Bright surface points of the scan, to be turned. */
function LookInSpace({
  client,
  specimen,
  mirrored,
}: Pick<HandednessSheetProps, "client" | "specimen"> & { readonly mirrored: boolean }) {
  const host = useRef<HTMLDivElement>(null);
  const view = useRef<SpaceView | null>(null);
  const [points, setPoints] = useState<Float32Array | null>(null);
  const { id, polarity, volume } = specimen;
  useEffect(() => {
    const made = new SpaceView(host.current!);
    made.show({ bounds: scanBounds(volume), caption: "Looking for the surface …" });
    view.current = made;
    let current = true;
    client
      .surface({ specimen: id, limit: SURFACE_POINTS, polarity })
      .then((frame) => {
        // Little-endian float32 in a body that need not be aligned.
        if (current && frame !== null) setPoints(new Float32Array(frame.body.slice().buffer));
      })
      .catch((error: unknown) => current && made.show({ caption: error instanceof Error ? error.message : String(error) }));
    return () => {
      current = false;
      view.current = null;
      made.dispose();
    };
  }, [client, id, polarity, volume]);
  useEffect(() => {
    if (points === null) return;
    const { direction: d } = volume;
    const slices = normalise([d[2], d[5], d[8]]);
    const surface = mirrored ? mirroredPoints(points, scanBounds(volume).centre, slices) : points;
    view.current?.show({ surface, caption: mirrored ? "mirror image" : "as it was taken in" });
  }, [points, mirrored, volume]);
  return <div class="shelf-space" ref={host} />;
}
