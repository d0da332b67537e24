// The robot annotator walks through the demo valve in the real page: every tree by clicks and keys on the section.
// Run: npm run build && npm run bench -- tracing
import { demoValve } from "#shared/phantom/demo-valve.ts";
import { walkDemoValve, walkTable } from "#test/browser/robot-walk.ts";

/** @param names of trees; all when left out. */
export async function bench(print: (line: string) => void, _cpuMs: () => number, names?: readonly string[]): Promise<void> {
  const walk = await walkDemoValve(names ?? demoValve().truth.trees.map(({ name }) => name!));
  for (const line of walkTable(walk)) print(line);
}
