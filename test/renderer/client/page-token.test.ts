import { describe, expect, it } from "vitest";
import { takePageToken } from "#renderer/client/page-token.ts";

function places(hash: string, kept: string | null = null) {
  const store = new Map<string, string>(kept === null ? [] : [["tautline-token", kept]]);
  const urls: string[] = [];
  return {
    urls,
    location: { hash, pathname: "/", search: "" },
    history: { replaceState: (_: unknown, __: string, url: string) => void urls.push(url) },
    sessionStorage: {
      getItem: (key: string) => store.get(key) ?? null,
      setItem: (key: string, value: string) => void store.set(key, value),
    },
  };
}

describe("the page's token", () => {
  it("is taken from the fragment, kept for a reload, and wiped from the address", () => {
    const page = places("#token=abc_1-2&/desk/s/p");
    expect(takePageToken(page)).toBe("abc_1-2");
    expect(page.urls).toEqual(["/#/desk/s/p"]);
    expect(takePageToken({ ...page, location: { ...page.location, hash: "" } })).toBe("abc_1-2");
  });

  it("is replaced by a newer run's, and empty when none was ever given", () => {
    expect(takePageToken(places("#token=new", "old"))).toBe("new");
    expect(takePageToken(places(""))).toBe("");
  });
});
