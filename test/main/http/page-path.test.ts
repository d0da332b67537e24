import { describe, expect, it } from "vitest";
import { pagePath } from "#main/http/page-path.ts";

describe("the page file that a path names", () => {
  it("is decoded once and lies below the page's folder", () => {
    expect(pagePath("/")).toBe("index.html");
    expect(pagePath("/assets/page-1.js")).toBe("assets/page-1.js");
    expect(pagePath("/a%20b.html")).toBe("a b.html");
  });

  it("is refused where a part could leave the folder, now or after another decoding", () => {
    for (const path of [
      "/..",
      "/../x",
      "/a/../x",
      "/a/./x",
      "/.",
      "/a//x",
      "/a/",
      "//x",
      "/%2e%2e/x",
      "/..%2fx",
      "/a%5cx",
      "/a\\x",
      "/%252e",
      "/%00",
      "/c:/x",
      "/%",
      "/%ff",
      "x",
      "",
    ]) {
      expect(() => pagePath(path), path).toThrow(expect.objectContaining({ tag: "bad-request" }));
    }
  });
});
