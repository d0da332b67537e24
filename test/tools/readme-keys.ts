import { keyListMarkdown } from "#renderer/editor/commands/command-table.ts";

const BEGIN = "<!-- keys: begin (made by npm run pictures) -->";
const END = "<!-- keys: end -->";

/** The README with the key list as the command table has it now. */
export function withKeyList(readme: string): string {
  const [from, to] = [readme.indexOf(BEGIN), readme.indexOf(END)];
  if (from < 0 || to < from) throw new Error("README.md has no place for the key list.");
  return `${readme.slice(0, from)}${BEGIN}\n${keyListMarkdown().trim()}\n${readme.slice(to)}`;
}
