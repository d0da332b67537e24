/**
 * The entries whose group, label or name holds every word of `text`, those that begin a word with it first; all of them for no
 * text.
 */
export function matching<T extends { readonly label: string; readonly name: string; readonly group: string }>(
  entries: readonly T[],
  text: string,
): T[] {
  const words = text
    .toLowerCase()
    .split(/\s+/)
    .filter((word) => word !== "");
  const scored = entries.flatMap((entry) => {
    const searched = `${entry.label} ${entry.name} ${entry.group}`.toLowerCase();
    if (!words.every((word) => searched.includes(word))) return [];
    const begins = words.filter((word) => new RegExp(`(^|[^\\p{L}])${escaped(word)}`, "u").test(searched)).length;
    return [{ entry, begins }];
  });
  return scored.sort((a, b) => b.begins - a.begins).map(({ entry }) => entry);
}

function escaped(word: string): string {
  return word.replace(/[.*+?^${}()|[\]\\]/g, "\\$&");
}
