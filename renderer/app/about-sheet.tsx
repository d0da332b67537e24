import { useEffect, useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import type { Client } from "#renderer/client/client.ts";
import type { HelloAnswer } from "#shared/api/routes.ts";

/** What the program is for, and what it is not. */
export const CAUTIONS: readonly string[] = [
  "Research use only. Not a medical device; not for diagnosis, monitoring, planning or treatment.",
  "Measurements carry uncertainty from scan and annotator.",
  "Questions about a person's health belong to a licensed clinician; donor consent, tissue and data follow local law and the institution's rules.",
];

/** About the program, with its cautions. */
export function AboutSheet({ client, close }: { readonly client: Client; readonly close: () => void }) {
  const [hello, setHello] = useState<HelloAnswer | null>(null);
  useEffect(() => {
    client
      .hello()
      .then(setHello)
      // Without an answer the cautions stand alone.
      .catch(() => undefined);
  }, [client]);
  return (
    <Sheet title="About Tautline" close={close} kind="small-sheet">
      <p>
        Tautline {hello?.version ?? ""}, an offline desk for reference trees of mitral-valve chordae tendineae from micro-CT
        scans.
        {hello === null ? "" : ` Library: ${hello.library}`}
      </p>
      <ul class="cautions">
        {CAUTIONS.map((caution) => (
          <li key={caution}>{caution}</li>
        ))}
      </ul>
      <p class="soft">Nothing leaves this computer. Licensed under Apache-2.0.</p>
    </Sheet>
  );
}
