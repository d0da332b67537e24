import { describe, expect, it } from "vitest";
import { NO_LINES, readChain, splitLog } from "#shared/log/chain.ts";
import { PassHistory } from "#shared/log/history.ts";
import { hashOfLine } from "#shared/log/line.ts";

function threeLines(): string[] {
  const stamp = { t: 1, mono: 1, session: "w" };
  const { history, lines } = PassHistory.begin({ pass: "p", specimen: "s", annotator: "AN-1", number: 1, epoch: "e" }, stamp);
  return [...lines, ...history.mark("one", stamp), ...history.mark("two", stamp)];
}

describe("the text of a log", () => {
  it("is split into its lines", () => {
    expect(splitLog("a\nb\n")).toEqual({ lines: ["a"], torn: "b" });
    expect(splitLog("1\n2\n")).toEqual({ lines: ["1", "2"], torn: null });
    expect(splitLog("")).toEqual({ lines: [], torn: null });
  });

  it("loses a last line that was torn off, wherever it was torn", () => {
    const lines = threeLines();
    const text = `${lines.join("\n")}\n`;
    const start = text.length - lines[2]!.length - 1;
    for (let end = start + 1; end < text.length; end++) {
      const { lines: whole, torn } = splitLog(text.slice(0, end));
      expect(whole).toEqual(lines.slice(0, 2));
      expect(torn).toBe(text.slice(start, end));
    }
  });

  it("loses a last line of zeros, as a power cut leaves it", () => {
    const lines = threeLines();
    const { lines: whole } = splitLog(`${lines.slice(0, 2).join("\n")}\n${"\0".repeat(40)}\n`);
    expect(whole).toEqual(lines.slice(0, 2));
  });
});

describe("the chain of a log", () => {
  it("is read when every link holds", () => {
    const lines = threeLines();
    expect(readChain(lines).map(({ record }) => record.seq)).toEqual([0, 1, 2]);
    expect(readChain(lines.slice(1), { seq: 0, hash: hashOfLine(lines[0]!) })).toHaveLength(2);
    expect(readChain([], NO_LINES)).toEqual([]);
  });

  it("broken by a changed, missing, doubled or exchanged line is reported at that line", () => {
    const [a, b, c] = threeLines() as [string, string, string];
    expect(() => readChain([a, b.replace("one", "uno"), c])).toThrowError(/line 3.*hash of the line before/);
    expect(() => readChain([a, c])).toThrowError(/line 2.*expected record 1, found record 2/);
    expect(() => readChain([a, b, b])).toThrowError(/line 3/);
    expect(() => readChain([b, c])).toThrowError(/line 1/);
    expect(() => readChain([a, b], { seq: 4, hash: "0".repeat(64) })).toThrowError(/line 6/);
  });

  it("names the file and says that nothing was repaired", () => {
    const [a, b, c] = threeLines() as [string, string, string];
    expect(() => readChain([a, b.replace("one", "uno"), c], NO_LINES, "journal.jsonl")).toThrowError(
      /^journal\.jsonl \(line 3\).*nothing was repaired/,
    );
  });
});
