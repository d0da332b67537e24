import { contextBridge, ipcRenderer, webUtils } from "electron";
import { BRIDGE_CHANNELS, BRIDGE_NAME, type Bridge, type BridgeCall, COMMAND_CHANNEL } from "#shared/api/bridge.ts";

const call = (name: BridgeCall) => (argument: unknown) => ipcRenderer.invoke(BRIDGE_CHANNELS[name], argument);

// Named functions only: the page never reaches `ipcRenderer`, an event object or a channel's name.
const bridge: Bridge = Object.freeze({
  pickScan: call("pickScan"),
  pickSavePath: call("pickSavePath"),
  showInFolder: call("showInFolder"),
  setMenu: call("setMenu"),
  pathOfDropped: (file: unknown) => webUtils.getPathForFile(file as File),
  onCommand: (listener: (name: string) => void) => {
    const hear = (_event: unknown, name: unknown) => listener(String(name));
    ipcRenderer.on(COMMAND_CHANNEL, hear);
    return () => void ipcRenderer.removeListener(COMMAND_CHANNEL, hear);
  },
});

contextBridge.exposeInMainWorld(BRIDGE_NAME, bridge);
