import { describe, expect, it } from "vitest";
import { APP_URL, isOwnAddress, SCHEME_PRIVILEGES } from "#main/electron/own-address.ts";

describe("the app's own address", () => {
  it("is the scheme and host, whatever the path", () => {
    for (const address of [APP_URL, `${APP_URL}index.html?a=1#b`, "TAUTLINE://app/x"])
      expect([address, isOwnAddress(address)]).toEqual([address, true]);
  });

  it("is no address that only looks like it", () => {
    for (const address of [
      "tautline://app.evil.example/",
      "tautline://app:80/",
      "tautline://app@evil.example/",
      "tautline://user@app/",
      "tautline://evil.example/app/",
      "tautlineX://app/",
      "tautline-x://app/",
      "other://app/",
      "tautline:app/",
      "tautline:///app/",
      "https://app/",
      "file:///app/",
      "about:blank",
      "data:text/html,x",
      "blob:tautline://app/1",
      "javascript:alert(1)",
      "//app/",
      "",
      "\0",
    ]) {
      expect([address, isOwnAddress(address)]).toEqual([address, false]);
    }
  });

  it("belongs to a standard, secure scheme that does not bypass the content policy", () => {
    expect(SCHEME_PRIVILEGES).toEqual({ standard: true, secure: true, supportFetchAPI: true, stream: true });
  });
});
