import type { IpcMain, IpcMainInvokeEvent } from "electron";
import { checkArgument } from "#main/electron/bridge-shapes.ts";
import { isOwnAddress } from "#main/electron/own-address.ts";
import { BRIDGE_CHANNELS, type BridgeCall, type BridgeCalls, type BridgeReply } from "#shared/api/bridge.ts";
import { encodeError, isTautlineError, TautlineError } from "#shared/errors.ts";

export type BridgeActions = {
  readonly [Name in BridgeCall]: (argument: BridgeCalls[Name]["argument"]) => Promise<BridgeCalls[Name]["result"]>;
};

/**
 * Answers the bridge's channels; the only place that touches `ipcMain`. A message from anything but the top frame of the
 * app's own page, or with an argument of another shape, is answered with an error.
 * @returns undoes it
 */
export function hostBridge(
  ipc: Pick<IpcMain, "handle" | "removeHandler">,
  actions: BridgeActions,
  onFault: (error: unknown) => void,
): () => void {
  for (const [name, channel] of Object.entries(BRIDGE_CHANNELS) as [BridgeCall, string][]) {
    ipc.handle(channel, async (event, argument: unknown): Promise<BridgeReply<unknown>> => {
      try {
        expectOwnTopFrame(event);
        const act = actions[name] as (argument: unknown) => Promise<unknown>;
        return { ok: true, value: await act(checkArgument(name, argument)) };
      } catch (error) {
        if (!isTautlineError(error) || error.tag === "internal") onFault(error);
        return { ok: false, error: encodeError(error) };
      }
    });
  }
  return () => {
    for (const channel of Object.values(BRIDGE_CHANNELS)) ipc.removeHandler(channel);
  };
}

function expectOwnTopFrame(event: Pick<IpcMainInvokeEvent, "senderFrame">): void {
  // Null once the frame was destroyed or has navigated away.
  const frame = event.senderFrame;
  if (frame && frame.parent === null && isOwnAddress(frame.url)) return;
  const reason = "the message does not come from the program's own page";
  throw new TautlineError("token-refused", `Refused: ${reason}.`, { reason });
}
