import { describe, expect, it } from "vitest";
import { equalInConstantTime } from "#main/http/constant-time.ts";

describe("comparing a token", () => {
  it("finds equal texts equal and all others not, of whatever length", () => {
    expect(equalInConstantTime("token", "token")).toBe(true);
    for (const given of ["", "t", "toke", "tokem", "Token", "tokenn", "tokentoken", "\0token"]) {
      expect([given, equalInConstantTime(given, "token")]).toEqual([given, false]);
    }
    expect(equalInConstantTime("", "")).toBe(true);
    expect(equalInConstantTime("x", "")).toBe(false);
    expect(equalInConstantTime("\0", "")).toBe(false);
  });
});
