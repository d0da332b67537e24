import { createHash } from "node:crypto";
import { describe, expect, it } from "vitest";
import { hashOfLine, lineOf, parseLine } from "#shared/log/line.ts";
import type { LogRecord } from "#shared/log/records.ts";

const record: LogRecord = {
  seq: 3,
  parent: 2,
  prev: "a".repeat(64),
  t: 1_800_000_000_000,
  mono: 12.5,
  session: "w1",
  kind: "op",
  label: "Längs — 弦",
  body: {
    code: "start-tree",
    changes: [
      { table: "tree", id: "t1", from: null, to: { id: "t1", name: "ALPM-01", root: "n1" } },
      {
        table: "node",
        id: "n1",
        from: null,
        to: { id: "n1", tree: "t1", kind: "origin", position: [1, 2.000001, -3] as never, site: "head" },
      },
    ],
  },
};

function changed(change: (value: Record<string, never>) => void): string {
  const copy = JSON.parse(lineOf(record)) as Record<string, never>;
  change(copy);
  return JSON.stringify(copy);
}

describe("a line of the log", () => {
  it("is read back as the record it was written from", () => {
    expect(parseLine(lineOf(record), 4, "journal.jsonl")).toEqual(record);
    expect(lineOf(record)).not.toContain("\n");
  });

  // Source: Node's own SHA-256 (OpenSSL), and the value of FIPS 180-4 for "abc".
  it("is hashed by SHA-256 over its UTF-8 bytes", () => {
    expect(hashOfLine("abc")).toBe("ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
    const line = lineOf(record);
    expect(hashOfLine(line)).toBe(createHash("sha256").update(line, "utf8").digest("hex"));
  });

  // biome-ignore lint/suspicious/noExplicitAny: the records are spoilt on purpose
  const spoils: [string, (v: any) => void, RegExp][] = [
    ["a negative seq", (v) => (v.seq = -1), /line 4, record\.seq/],
    ["a seq that is no whole number", (v) => (v.seq = 1.5), /record\.seq/],
    ["an unknown kind", (v) => (v.kind = "wish"), /record\.kind/],
    ["a key too many", (v) => (v.extra = 1), /record\.extra.*no such key/],
    ["a key too few", (v) => delete v.label, /record\.label/],
    ["a hash that is none", (v) => (v.prev = "xyz"), /record\.prev/],
    ["an unknown code", (v) => (v.body.code = "undo"), /body\.code/],
    ["an unknown table", (v) => (v.body.changes[0].table = "fork"), /changes\[0\]\.table/],
    ["an id of another table", (v) => (v.body.changes[0].id = "n1"), /changes\[0\]\.id/],
    ["an id with a leading zero", (v) => (v.body.changes[0].id = "t01"), /changes\[0\]\.id/],
    ["a record under another id", (v) => (v.body.changes[0].to.id = "t2"), /changes\[0\]\.to\.id/],
    ["a position with two numbers", (v) => v.body.changes[1].to.position.pop(), /to\.position.*three finite numbers/],
    ["a position with null", (v) => (v.body.changes[1].to.position[0] = null), /to\.position/],
    ["an unknown node kind", (v) => (v.body.changes[1].to.kind = "leaf"), /to\.kind/],
    ["an unknown key in a node", (v) => (v.body.changes[1].to.colour = "red"), /to\.colour/],
    ["changes that are no list", (v) => (v.body.changes = {}), /body\.changes.*a list/],
  ];
  it.each(spoils)("with %s is refused, naming the line and the place", (_, spoil, message) => {
    expect(() => parseLine(changed(spoil), 4, "journal.jsonl")).toThrowError(message);
    expect(() => parseLine(changed(spoil), 4, "journal.jsonl")).toThrowError(
      expect.objectContaining({ tag: "unreadable-input" }),
    );
  });

  it("of a newer version is refused with what to do", () => {
    const header = {
      format: "tautline-pass-log",
      version: 2,
      pass: "p",
      specimen: "s",
      annotator: "AN-1",
      number: 1,
      epoch: "e",
    };
    const line = JSON.stringify({
      seq: 0,
      parent: 0,
      prev: "",
      t: 1,
      mono: 0,
      session: "w",
      kind: "header",
      label: "",
      body: header,
    });
    expect(() => parseLine(line, 1, "journal.jsonl")).toThrowError(/newer Tautline/);
  });

  it("with a curve whose sizes lie is refused", () => {
    const curve = (body: object) =>
      JSON.stringify({ seq: 1, parent: 0, prev: "", t: 1, mono: 0, session: "w", kind: "curve", label: "", body });
    const good = { id: "c1", points: [0, 0, 0, 1, 1, 1], radii: [0.1, null], madeBy: [[0, 1, "guide"]], imageFit: null };
    expect(parseLine(curve(good), 2, "j").body).toEqual(good);
    expect(() => parseLine(curve({ ...good, radii: [0.1] }), 2, "j")).toThrowError(/two points or more/);
    expect(() => parseLine(curve({ ...good, points: [0, 0, 0] }), 2, "j")).toThrowError(/6 numbers for 2 radii/);
    expect(() => parseLine(curve({ ...good, madeBy: [[0, 2, "guide"]] }), 2, "j")).toThrowError(/indices in 0\.\.1/);
  });

  it("cut short or spoilt anywhere is a typed error, never another one", () => {
    const line = lineOf(record);
    for (let at = 0; at < line.length; at += 3) {
      for (const spoilt of [
        line.slice(0, at),
        `${line.slice(0, at)}\u0000${line.slice(at + 1)}`,
        `${line.slice(0, at)}9${line.slice(at)}`,
      ]) {
        try {
          parseLine(spoilt, 1, "j");
        } catch (error) {
          expect(error).toMatchObject({ tag: "unreadable-input" });
        }
      }
    }
  });
});
