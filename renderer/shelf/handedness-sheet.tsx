import { useEffect, useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import type { Client } from "#renderer/client/client.ts";
import { GreyPicture } from "#renderer/shelf/grey-picture.tsx";
import type { SectionHeader } from "#shared/api/engine.ts";
import type { BinaryFrame } from "#shared/api/frame.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";

export interface HandednessSheetProps {
  readonly client: Pick<Client, "picture">;
  readonly specimen: SpecimenRecord;
  /** Writes the confirmation; rejects with a sentence when that fails. */
  readonly confirm: () => Promise<void>;
  readonly close: () => void;
}

/** Confirming that a scan is no mirror image: its projection, a switch that shows the mirror image, and what follows from each. */
export function HandednessSheet({ client, specimen, confirm, close }: HandednessSheetProps) {
  const [frame, setFrame] = useState<BinaryFrame<SectionHeader> | null>(null);
  const [mirrored, setMirrored] = useState(false);
  const [busy, setBusy] = useState(false);
  const [failure, setFailure] = useState<string | null>(null);
  useEffect(() => {
    client
      .picture(specimen.id)
      .then(setFrame)
      // The question can be answered without the picture.
      .catch(() => undefined);
  }, [client, specimen.id]);
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
    <Sheet title={`Handedness of ${specimen.name}`} close={close} foot={foot} kind="small-sheet">
      <div class="shelf-handedness">
        {frame === null ? null : (
          <GreyPicture
            class="shelf-picture"
            width={frame.header.width}
            height={frame.header.height}
            grey={frame.body}
            mirrored={mirrored}
            label={mirrored ? "Mirror image of the projection" : "Projection of the scan"}
          />
        )}
        <div>
          <p>
            When slices were written in reversed order, the valve is its mirror image and the two papillary muscles trade places.
            Compare the picture with the specimen or a photograph of it.
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
