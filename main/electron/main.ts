import { join } from "node:path";
import { app, BrowserWindow, dialog, ipcMain, session } from "electron";
import { registerScheme, serveScheme } from "#main/electron/app-scheme.ts";
import { bridgeActions } from "#main/electron/bridge-actions.ts";
import { hostBridge } from "#main/electron/bridge-host.ts";
import { keepAtHome, refusePermissions } from "#main/electron/content-rules.ts";
import { desktopAbilities } from "#main/electron/desktop-abilities.ts";
import { Disposers } from "#main/electron/disposers.ts";
import { externalOpening } from "#main/electron/external-opening.ts";
import { openExternal } from "#main/electron/open-external.ts";
import { APP_URL } from "#main/electron/own-address.ts";
import { SCHEME_ACCESS } from "#main/electron/scheme-access.ts";
import { windowOptions } from "#main/electron/window-options.ts";
import { memoryLimit } from "#main/engine/memory-plan.ts";
import { createHandler } from "#main/http/handler.ts";
import { programFiles } from "#main/node/program-files.ts";
import { libraryFolder } from "#main/node/user-folders.ts";
import { openWorkplace } from "#main/node/workplace.ts";
import { isTautlineError } from "#shared/errors.ts";

// What is opened is closed in reverse order; each disposer stands on the line after its opening.
const disposers = new Disposers();
const onFault = (error: unknown) => console.error(error);

// Before ready: every page in the sandbox, our scheme a standard and secure one, one instance a user.
app.enableSandbox();
registerScheme();
if (!app.requestSingleInstanceLock()) app.exit(0);

// Rules for every page and session there will ever be.
app.on("web-contents-created", (_event, contents) => {
  keepAtHome(contents, (address) => void openExternal(address, externalOpening).catch(onFault));
});
app.on("session-created", (created) => refusePermissions(created));
app.on("window-all-closed", () => app.quit());
app.on("will-quit", (event) => {
  if (disposers.empty) return;
  event.preventDefault();
  void disposers.dispose(onFault).then(() => app.quit());
});

await app.whenReady();
refusePermissions(session.defaultSession);
try {
  // The library, with the lease on it, engine and jobs.
  const program = programFiles(import.meta.url);
  const root = libraryFolder(undefined);
  const memoryBytes = memoryLimit(undefined, process.env);
  const workplace = await openWorkplace({
    root,
    shell: "electron",
    version: program.version,
    page: program.page,
    graceMs: 0,
    onAllLeft: () => {},
    onFault,
    abilities: (library) => desktopAbilities(library, memoryBytes),
  });
  disposers.add(() => workplace.close());

  // Page and requests, by our own scheme.
  disposers.add(serveScheme(createHandler(workplace.ports, { access: SCHEME_ACCESS, onFault })));

  // The one window, and its bridge.
  const window = new BrowserWindow(windowOptions(join(program.root, "dist", "preload", "preload.cjs")));
  disposers.add(hostBridge(ipcMain, bridgeActions(window), onFault));
  window.once("ready-to-show", () => window.show());
  app.on("second-instance", () => {
    if (window.isMinimized()) window.restore();
    window.focus();
  });
  await window.loadURL(APP_URL);
} catch (error) {
  onFault(error);
  dialog.showErrorBox("Tautline cannot open", isTautlineError(error) ? error.message : "The program met a fault of its own.");
  app.quit();
}
