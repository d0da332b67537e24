import "#renderer/desk/desk.css";
import { useEffect, useState } from "preact/hooks";
import type { Services } from "#renderer/app/services.ts";
import { Sheet } from "#renderer/app/sheet.tsx";
import { DeskScreen } from "#renderer/desk/desk-screen.tsx";
import { type OpenDesk, openDesk } from "#renderer/desk/model/open-desk.ts";

export interface DeskProps {
  readonly services: Services;
  readonly specimen: string;
  readonly pass: string;
}

interface Question {
  readonly text: string;
  readonly yes: string;
  readonly no: string;
  readonly answer: (yes: boolean) => void;
}

/** The desk of one pass: opens it, and shows why when it cannot be opened. */
export function Desk({ services, specimen, pass }: DeskProps) {
  const [open, setOpen] = useState<OpenDesk | null>(null);
  const [failure, setFailure] = useState<string | null>(null);
  const [question, setQuestion] = useState<Question | null>(null);
  const [attempt, setAttempt] = useState(0);

  useEffect(() => {
    let desk: OpenDesk | null = null;
    let gone = false;
    const ask = (text: string, yes: string, no: string) =>
      new Promise<boolean>((resolve) => {
        setQuestion({
          text,
          yes,
          no,
          answer: (value) => {
            setQuestion(null);
            resolve(value);
          },
        });
      });
    setFailure(null);
    openDesk(services, specimen, pass, ask)
      .then((opened) => {
        if (gone) opened.close();
        else {
          desk = opened;
          setOpen(opened);
        }
      })
      .catch((error: unknown) => {
        if (!gone) setFailure(error instanceof Error ? error.message : String(error));
      });
    return () => {
      gone = true;
      desk?.close();
      setOpen(null);
    };
  }, [services, specimen, pass, attempt]);

  if (question !== null) {
    const foot = (
      <>
        <button type="button" class="button" onClick={() => question.answer(false)}>
          {question.no}
        </button>
        <button type="button" class="button main" onClick={() => question.answer(true)}>
          {question.yes}
        </button>
      </>
    );
    return (
      <Sheet title="The pass and its journal" close={() => question.answer(false)} foot={foot}>
        <p>{question.text}</p>
      </Sheet>
    );
  }
  if (failure !== null) {
    return (
      <main class="desk-waiting">
        <div class="pane desk-failure" role="alert">
          <h1>The pass cannot be opened</h1>
          <p>{failure}</p>
          <div class="row">
            <button type="button" class="button" onClick={() => services.goTo({ screen: "shelf" })}>
              Back to the shelf
            </button>
            <button type="button" class="button main" onClick={() => setAttempt(attempt + 1)}>
              Try again
            </button>
          </div>
        </div>
      </main>
    );
  }
  if (open === null) return <main class="desk-waiting" aria-busy="true" aria-label="Opening the pass" />;
  return <DeskScreen model={open.model} />;
}
