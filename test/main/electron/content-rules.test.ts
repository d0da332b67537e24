import { describe, expect, it } from "vitest";
import {
  ALLOWED_PERMISSIONS,
  keepAtHome,
  type RuledContents,
  type RuledSession,
  refusePermissions,
} from "#main/electron/content-rules.ts";

type Listener = (event: { preventDefault(): void; url?: string }, ...details: unknown[]) => void;

function ruled() {
  const listeners = new Map<string, Listener>();
  const asked: string[] = [];
  let openHandler: ((details: { url: string }) => { action: string }) | undefined;
  const contents = {
    on: (event: string, listener: Listener) => listeners.set(event, listener),
    setWindowOpenHandler: (handler: typeof openHandler) => {
      openHandler = handler;
    },
  } as unknown as RuledContents;
  keepAtHome(contents, (address) => void asked.push(address));
  /** True when the event was prevented. */
  const fire = (name: string, event: { url?: string }, ...details: unknown[]) => {
    const state = { prevented: false };
    listeners.get(name)!({ ...event, preventDefault: () => void Object.assign(state, { prevented: true }) }, ...details);
    return state.prevented;
  };
  return { fire, asked, open: (url: string) => openHandler!({ url }) };
}

describe("rules of every page", () => {
  it.each(["will-navigate", "will-redirect", "will-frame-navigate"])(
    "%s lets the app's own pages through and no other",
    (name) => {
      const { fire } = ruled();
      expect(fire(name, { url: "tautline://app/index.html" })).toBe(false);
      for (const url of [
        "https://evil.example/",
        "tautline://app.evil/",
        "other://app/",
        "file:///etc/passwd",
        "about:blank",
        "javascript:1",
      ]) {
        expect([url, fire(name, { url })]).toEqual([url, true]);
      }
      // Older signatures hand the address over beside the event; without any address nothing is let through.
      expect(fire(name, {}, "https://evil.example/")).toBe(true);
      expect(fire(name, {}, "tautline://app/")).toBe(false);
      expect(fire(name, {})).toBe(true);
    },
  );

  it("attaches no guest page and opens no window; a link that wanted one is asked about", () => {
    const { fire, open, asked } = ruled();
    expect(fire("will-attach-webview", { url: "tautline://app/" })).toBe(true);
    for (const url of ["https://example.org/", "tautline://app/", "about:blank"]) expect(open(url)).toEqual({ action: "deny" });
    expect(asked).toEqual(["https://example.org/", "tautline://app/", "about:blank"]);
  });

  it("refuses every permission, asked for or looked up, and every device", () => {
    const handlers: Record<string, (...args: never[]) => unknown> = {};
    const session = new Proxy(
      {},
      {
        get: (_, name: string) => (handler: never) => {
          handlers[name] = handler;
        },
      },
    ) as RuledSession;
    refusePermissions(session);
    expect([...ALLOWED_PERMISSIONS]).toEqual([]);
    for (const permission of [
      "media",
      "geolocation",
      "notifications",
      "clipboard-read",
      "fullscreen",
      "fileSystem",
      "openExternal",
      "usb",
    ]) {
      const answers: boolean[] = [];
      const ask = handlers.setPermissionRequestHandler as unknown as (c: null, p: string, answer: (yes: boolean) => void) => void;
      ask(null, permission, (yes) => void answers.push(yes));
      expect([permission, answers]).toEqual([permission, [false]]);
      const check = handlers.setPermissionCheckHandler as unknown as (c: null, p: string) => boolean;
      expect(check(null, permission)).toBe(false);
    }
    expect((handlers.setDevicePermissionHandler as unknown as () => boolean)()).toBe(false);
  });
});
