import { describe, expect, it } from "vitest";
import { windowOptions } from "#main/electron/window-options.ts";

describe("the window", () => {
  it("gives its page no Node, the sandbox, a world apart from the preload, and nothing that weakens these", () => {
    const { webPreferences } = windowOptions("/preload.cjs");
    expect(webPreferences).toEqual({
      preload: "/preload.cjs",
      sandbox: true,
      contextIsolation: true,
      nodeIntegration: false,
      nodeIntegrationInWorker: false,
      nodeIntegrationInSubFrames: false,
      webviewTag: false,
      spellcheck: false,
      navigateOnDragDrop: false,
    });
  });
});
