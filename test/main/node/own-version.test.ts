import { readFileSync } from "node:fs";
import { pathToFileURL } from "node:url";
import { expect, it } from "vitest";
import { ownVersion } from "#main/node/own-version.ts";

it("is the version of the package that a module belongs to, and unknown elsewhere", () => {
  const { version } = JSON.parse(readFileSync("package.json", "utf8")) as { version: string };
  expect(ownVersion(import.meta.url)).toBe(version);
  expect(ownVersion(pathToFileURL("/no/such/folder/module.mjs").href)).toBe("unknown");
});
