/** What of a keyboard event a shortcut looks at. */
export interface KeyPress {
  readonly key: string;
  readonly ctrlKey: boolean;
  readonly metaKey: boolean;
  readonly altKey: boolean;
  readonly shiftKey: boolean;
}

const NAMED: Readonly<Record<string, string>> = {
  " ": "Space",
  Esc: "Escape",
  Left: "ArrowLeft",
  Right: "ArrowRight",
  Up: "ArrowUp",
  Down: "ArrowDown",
  Del: "Delete",
};

/**
 * The text of a key press: modifiers in the order Ctrl, Alt, Shift, then the key (`Ctrl+Shift+Z`, `I`, `?`, `ArrowUp`).
 * The command key of Apple keyboards counts as Ctrl. Shift is named with letters and named keys only, because for other
 * characters the keyboard layout decides whether it was needed. Empty for a modifier alone.
 */
export function textOfPress(press: KeyPress): string {
  if (["Control", "Shift", "Alt", "Meta", "AltGraph", "Dead", "Process", "Unidentified"].includes(press.key)) return "";
  const key = NAMED[press.key] ?? (press.key.length === 1 ? press.key.toUpperCase() : press.key);
  const isLetter = /^\p{L}$/u.test(key);
  const parts: string[] = [];
  if (press.ctrlKey || press.metaKey) parts.push("Ctrl");
  if (press.altKey) parts.push("Alt");
  if (press.shiftKey && (isLetter || key.length > 1)) parts.push("Shift");
  return [...parts, key].join("+");
}

const SHOWN: Readonly<Record<string, string>> = {
  ArrowLeft: "←",
  ArrowRight: "→",
  ArrowUp: "↑",
  ArrowDown: "↓",
  Escape: "Esc",
  Backspace: "⌫",
  Delete: "Del",
  PageUp: "Page up",
  PageDown: "Page down",
};

/** A shortcut as it is shown on a key cap. */
export function shownShortcut(shortcut: string): string {
  const parts = shortcut === "+" ? ["+"] : shortcut.split(/\+(?=.)/);
  return parts.map((part) => SHOWN[part] ?? part).join(" + ");
}
