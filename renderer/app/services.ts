import type { Notices } from "#renderer/app/notices.ts";
import type { Place } from "#renderer/app/place.ts";
import type { Client } from "#renderer/client/client.ts";
import type { Capabilities } from "#shared/api/capabilities.ts";

/** What every screen is given: made once at the entry point. */
export interface Services {
  readonly client: Client;
  readonly capabilities: Capabilities;
  readonly notices: Notices;
  /** Shows another screen; the browser's back button comes back. */
  readonly goTo: (place: Place) => void;
}
