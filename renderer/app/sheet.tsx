import type { ComponentChildren } from "preact";
import { useEffect, useId, useRef } from "preact/hooks";

export interface SheetProps {
  readonly title: string;
  /** Called on the close button, on Escape, and never else. */
  readonly close: () => void;
  readonly children: ComponentChildren;
  /** Buttons at the foot; left out, there is no foot. */
  readonly foot?: ComponentChildren;
  readonly kind?: string;
}

/** A modal sheet: traps focus, gives it back when closed, closes on Escape. */
export function Sheet(props: SheetProps) {
  const dialog = useRef<HTMLDialogElement>(null);
  const heading = useId();
  const isGone = useRef(false);
  useEffect(() => {
    const before = document.activeElement;
    const shown = dialog.current!;
    if (!shown.open) shown.showModal();
    // The first thing to fill in, rather than the button that closes.
    shown.querySelector<HTMLElement>(".sheet-body :is(input, select, textarea)")?.focus();
    return () => {
      isGone.current = true;
      if (shown.open) shown.close();
      if (before instanceof HTMLElement) before.focus();
    };
  }, []);
  return (
    <dialog
      ref={dialog}
      class={`sheet ${props.kind ?? ""}`}
      aria-labelledby={heading}
      onCancel={(event) => {
        event.preventDefault();
        props.close();
      }}
      onClose={() => {
        // A browser may close a dialog on Escape without asking first; the sheet must then not count as open.
        if (!isGone.current) props.close();
      }}
      onKeyDown={(event) => event.stopPropagation()}
    >
      <header>
        <h2 id={heading}>{props.title}</h2>
        <button type="button" class="button plain" aria-label="Close" title="Close (Esc)" onClick={props.close}>
          ✕
        </button>
      </header>
      <div class="sheet-body" tabIndex={0}>
        {props.children}
      </div>
      {props.foot === undefined ? null : <footer>{props.foot}</footer>}
    </dialog>
  );
}
