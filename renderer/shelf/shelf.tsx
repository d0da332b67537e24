import type { Services } from "#renderer/app/services.ts";

export interface ShelfProps {
  readonly services: Services;
}

/** The start screen: specimens of the library with their passes, and the ways to add a scan. */
export function Shelf(_props: ShelfProps) {
  return <main class="shelf" aria-label="Shelf" />;
}
