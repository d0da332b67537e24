import { useEffect, useState } from "preact/hooks";
import type { Client } from "#renderer/client/client.ts";
import type { ConnectionState } from "#renderer/client/event-stream.ts";

/** Says when the program behind the page is gone or was started anew, and what to do. */
export function ConnectionBanner({ client }: { readonly client: Client }) {
  const [state, setState] = useState<ConnectionState>("connecting");
  useEffect(() => client.onConnection(setState), [client]);
  if (state === "up" || state === "connecting") return null;
  const text =
    state === "restarted"
      ? "Tautline was started anew, and this page belongs to the earlier run. Go on in the page that the new run opened. Edits not yet saved are kept in this browser and are sent from there."
      : "Tautline does not answer. Start it again if it was closed; this page connects by itself while the same run is alive. Edits are kept in this window and sent later.";
  return (
    <div class="banner warn-banner" role="alert">
      {text}
    </div>
  );
}
