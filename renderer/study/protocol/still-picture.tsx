import { useEffect, useRef, useState } from "preact/hooks";

export interface StillPictureProps {
  readonly sha256: string;
  readonly read: (sha256: string) => Promise<Blob>;
  readonly label: string;
}

/** A kept still picture. It is drawn, since a page may show no addresses but its own, and reading it needs the run's token. */
export function StillPicture({ sha256, read, label }: StillPictureProps) {
  const canvas = useRef<HTMLCanvasElement>(null);
  const [state, setState] = useState<"reading" | "shown" | "missing">("reading");
  useEffect(() => {
    let gone = false;
    setState("reading");
    read(sha256)
      .then((blob) => createImageBitmap(blob))
      .then((picture) => {
        if (!gone && canvas.current !== null) {
          canvas.current.width = picture.width;
          canvas.current.height = picture.height;
          canvas.current.getContext("2d")?.drawImage(picture, 0, 0);
          setState("shown");
        }
        picture.close();
      })
      // The rule stands without its picture; it is said that it is missing.
      .catch(() => !gone && setState("missing"));
    return () => {
      gone = true;
    };
  }, [sha256, read]);
  return (
    <>
      {state === "shown" ? null : (
        <p class={state === "missing" ? "warn" : "soft"}>
          {state === "missing" ? "The picture cannot be read." : "reading the picture"}
        </p>
      )}
      <canvas ref={canvas} class="still" role="img" aria-label={label} hidden={state !== "shown"} />
    </>
  );
}
