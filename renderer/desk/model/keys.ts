import type { Command } from "#renderer/editor/commands/command.ts";
import { textOfPress } from "#renderer/editor/commands/shortcut.ts";

/** Keys that a focused control uses itself. */
const CONTROL_KEYS = ["Enter", "Space", "Tab", "Home", "End", "PageUp", "PageDown"];

/** Runs commands by their keys, as long as no text is being typed and no sheet is open; the returned function ends it. */
export function listenToKeys<Context>(context: Context, find: (press: KeyboardEvent) => Command<Context> | null): () => void {
  const onKey = (event: KeyboardEvent) => {
    if (event.defaultPrevented || document.querySelector("dialog[open]") !== null) return;
    const text = textOfPress(event);
    const target = event.target instanceof HTMLElement ? event.target : null;
    if (isTyping(target) && !(event.ctrlKey && event.key.toLowerCase() === "k")) return;
    if (isControl(target) && (CONTROL_KEYS.includes(text) || text.includes("Arrow"))) return;
    const command = find(event);
    if (command === null) return;
    // A key of ours never falls through to the browser, also when it can do nothing now.
    event.preventDefault();
    if (command.enabled(context)) void command.perform(context);
  };
  addEventListener("keydown", onKey);
  return () => removeEventListener("keydown", onKey);
}

function isTyping(target: HTMLElement | null): boolean {
  if (target === null) return false;
  if (target.isContentEditable || target instanceof HTMLTextAreaElement || target instanceof HTMLSelectElement) return true;
  return target instanceof HTMLInputElement && !["checkbox", "radio", "button", "range"].includes(target.type);
}

function isControl(target: HTMLElement | null): boolean {
  return target?.closest("button, a, input, [role=slider], [role=option], [role=tab], [role=treeitem]") != null;
}
