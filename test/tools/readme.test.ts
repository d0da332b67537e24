import { existsSync, readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";
import { VERBS } from "#main/cli/verbs.ts";
import { withKeyList } from "#test/tools/readme-keys.ts";

const root = fileURLToPath(new URL("../..", import.meta.url));
const readme = readFileSync(`${root}/README.md`, "utf8");

describe("the README", () => {
  it("lists the keys as the command table has them (npm run pictures -- keys)", () => {
    expect(withKeyList(readme)).toBe(readme);
  });

  it("names every verb", () => {
    for (const verb of VERBS) expect(readme).toContain(`\`tautline ${verb.name} `);
  });

  it("shows only pictures that are there, and carries the cautions", () => {
    const pictures = [...readme.matchAll(/!\[[^\]]+\]\(([^)]+)\)/g)].map((found) => found[1]!);
    expect(pictures.length).toBeGreaterThan(2);
    for (const picture of pictures) expect(existsSync(`${root}/${picture}`)).toBe(true);
    expect(readme).toContain("Not a medical device");
  });
});
