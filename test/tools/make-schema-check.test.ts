import { readFileSync } from "node:fs";
import { Ajv2020 } from "ajv/dist/2020.js";
import { describe, expect, it } from "vitest";
import { validate } from "#shared/formats/chordae/schema-check.generated.ts";
import { sampleFile } from "#test/shared/formats/chordae/sample-file.ts";
// @ts-expect-error a plain script without types
import { CHECK_PATH, makeSchemaCheck, SCHEMA_PATH } from "./make-schema-check.mjs";

describe("the compiled check of the tree file's schema", () => {
  it("is what its maker makes from the published schema today", () => {
    expect(readFileSync(CHECK_PATH, "utf8")).toBe(makeSchemaCheck());
  });

  it("needs neither imports nor eval", () => {
    expect(makeSchemaCheck()).not.toMatch(/\bimport\b|require\(|new Function|\beval\(/);
  });

  it("judges as the schema library itself does", () => {
    const live = new Ajv2020({ allowUnionTypes: true, strictTypes: false }).compile(
      JSON.parse(readFileSync(SCHEMA_PATH, "utf8")),
    );
    const values: unknown[] = [sampleFile(), {}, null, [], { ...sampleFile(), trees: [{}] }, { ...sampleFile(), volume: 3 }];
    for (const value of values) expect(validate(value)).toBe(live(value));
    expect(validate(sampleFile())).toBe(true);
  });
});
