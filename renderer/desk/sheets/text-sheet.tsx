import { useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";

export interface TextSheetProps {
  readonly title: string;
  readonly label: string;
  readonly first: string;
  readonly done: string;
  readonly take: (text: string) => void;
  readonly close: () => void;
}

/** Asks for one line of text. */
export function TextSheet({ title, label, first, done, take, close }: TextSheetProps) {
  const [text, setText] = useState(first);
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Cancel
      </button>
      <button type="submit" form="text-form" class="button main" disabled={text.trim() === ""}>
        {done}
      </button>
    </>
  );
  return (
    <Sheet title={title} close={close} foot={foot} kind="small-sheet">
      <form
        id="text-form"
        onSubmit={(event) => {
          event.preventDefault();
          close();
          take(text.trim());
        }}
      >
        <label class="stacked">
          <span>{label}</span>
          <input class="field" value={text} onInput={(event) => setText(event.currentTarget.value)} />
        </label>
      </form>
    </Sheet>
  );
}
