import type { Client } from "#renderer/client/client.ts";
import type { Capabilities } from "#shared/api/capabilities.ts";
import type { HelloAnswer } from "#shared/api/routes.ts";

export interface ShelfProps {
  readonly client: Client;
  readonly capabilities: Capabilities;
  readonly hello: HelloAnswer | null;
  /** Opens a pass on the desk. */
  readonly openPass: (specimen: string, pass: string) => void;
  /** Theme switch and the like, shown at the right of the head line. */
  readonly tools?: preact.ComponentChildren;
}

/** The start screen: specimens of the library with their passes, and the ways to add a scan. */
export function ShelfScreen(_props: ShelfProps) {
  return <main class="shelf" aria-label="Shelf" />;
}
