// Stands in for the `electron` module where its binary is missing: writes down what the main process asks of it, line by line,
// and plays one short life of the program: ready, a page loaded, some requests by the scheme, quit.
import { EventEmitter } from "node:events";

const tell = (what, ...details) => process.stdout.write(`${JSON.stringify([what, ...details])}\n`);
let answer;
let quits = 0;

class App extends EventEmitter {
  enableSandbox() {
    tell("enableSandbox");
  }
  requestSingleInstanceLock() {
    tell("requestSingleInstanceLock");
    return true;
  }
  async whenReady() {
    tell("whenReady");
  }
  isReady() {
    return true;
  }
  exit(code) {
    process.exit(code);
  }
  quit() {
    quits += 1;
    tell("quit", quits);
    let prevented = false;
    this.emit("will-quit", { preventDefault: () => (prevented = true) });
    if (!prevented) process.exit(0);
  }
}
export const app = new App();

export class BrowserWindow extends EventEmitter {
  constructor(options) {
    super();
    tell("BrowserWindow", options);
    app.emit(
      "web-contents-created",
      {},
      { on: (name) => tell("contents", name), setWindowOpenHandler: () => tell("setWindowOpenHandler") },
    );
  }
  async loadURL(url) {
    tell("loadURL", url);
    for (const target of ["", "api/hello", "..%2fpackage.json"]) {
      const response = await answer(new Request(url + target));
      tell("answer", target, response.status, (await response.text()).slice(0, 200));
    }
    app.quit();
  }
}

export const protocol = {
  registerSchemesAsPrivileged: (schemes) => tell("registerSchemesAsPrivileged", schemes),
  handle: (scheme, handler) => {
    tell("handle", scheme);
    answer = handler;
  },
  unhandle: (scheme) => tell("unhandle", scheme),
};
const handlers = ["setPermissionRequestHandler", "setPermissionCheckHandler", "setDevicePermissionHandler"];
export const session = { defaultSession: Object.fromEntries(handlers.map((name) => [name, () => tell(name)])) };
export const ipcMain = { handle: (channel) => tell("ipc", channel), removeHandler: (channel) => tell("removeHandler", channel) };
export const dialog = { showErrorBox: (title, text) => tell("showErrorBox", title, text) };
export const Menu = {};
export const shell = {};
