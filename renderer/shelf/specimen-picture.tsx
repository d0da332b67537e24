import { useEffect, useState } from "preact/hooks";
import type { Client } from "#renderer/client/client.ts";
import { GreyPicture } from "#renderer/shelf/grey-picture.tsx";
import type { SectionHeader } from "#shared/api/engine.ts";
import type { BinaryFrame } from "#shared/api/frame.ts";
import type { ShelfSpecimen } from "#shared/api/specimen.ts";

export interface SpecimenPictureProps {
  readonly client: Pick<Client, "picture">;
  readonly shown: ShelfSpecimen;
  /** Why there is no picture, in a sentence; null once there is one. */
  readonly tell?: (why: string | null) => void;
}

/** The small projection of a specimen, asked for once it can be there. */
export function SpecimenPicture({ client, shown, tell }: SpecimenPictureProps) {
  const [frame, setFrame] = useState<BinaryFrame<SectionHeader> | null>(null);
  const [missing, setMissing] = useState(false);
  const { id, name } = shown.specimen;
  useEffect(() => {
    let current = true;
    setMissing(false);
    client
      .picture(id)
      .then((answer) => {
        if (!current) return;
        setFrame(answer);
        tell?.(null);
      })
      // A picture is an ornament: without it the row says so and stays usable.
      .catch((error) => {
        if (!current) return;
        setMissing(true);
        tell?.(error instanceof Error ? error.message : String(error));
      });
    return () => {
      current = false;
    };
    // Asked again once the intake is through: the first answer may come from an unfinished store.
  }, [client, id, shown.incomplete]);
  if (frame === null) return <div class="shelf-picture empty">{missing ? "no picture" : ""}</div>;
  const { width, height } = frame.header;
  return <GreyPicture class="shelf-picture" width={width} height={height} grey={frame.body} label={`Projection of ${name}`} />;
}
