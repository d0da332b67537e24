import { describe, expect, it } from "vitest";
import { isTautlineError } from "#shared/errors.ts";
import { bagInfoText, manifestText, parseBagInfo, parseManifest } from "#shared/formats/bagit/bag-texts.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { parseAssignment } from "#shared/study/assignment-record.ts";
import { parsePacket } from "#shared/study/packet.ts";
import { parseStudy } from "#shared/study/parse-study.ts";
import { beginningProtocol } from "#shared/study/protocol.ts";
import { sampleStudy } from "#test/shared/study/sample-study.ts";

const id = "a0000000000000000001";
const sha = "a".repeat(64);
const head = { format: "tautline-packet", version: 1, study: id, assignment: id, code: "BCDF-GHJK" };
const protocol = { version: 1, sha256: sha };
const rules = beginningProtocol().drawing;
const json = (parse: (value: unknown) => unknown) => (text: string) => {
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch {
    return;
  }
  parse(value);
};
const packet = json((value) => parsePacket(value, "packet.json"));

const SAMPLES: Record<string, readonly [string, (text: string) => void]> = {
  "a study": [JSON.stringify(sampleStudy()), json((value) => parseStudy(value, "study.json"))],
  "an assignment": [
    JSON.stringify({
      format: "tautline-assignment",
      version: 1,
      study: id,
      assignment: id,
      code: "BCDF-GHJK",
      training: false,
      protocol,
      rules,
      pass: id,
      taken: 1,
      packet: sha,
      from: null,
      returned: { at: 1, head: { seq: 1, hash: sha }, files: ["x"], sealed: true },
    }),
    json((value) => parseAssignment(value, "assignment.json")),
  ],
  "a packet with an assignment": [
    JSON.stringify({ ...head, kind: "assignment", training: true, protocol, rules, scan: { within: true, sha256: sha } }),
    packet,
  ],
  "a packet with a scan": [JSON.stringify({ ...head, kind: "scan", scan: { sha256: sha } }), packet],
  "a packet with a pass": [
    JSON.stringify({ ...head, kind: "return", protocol, log: { pass: id, epoch: "e", seq: 3, hash: sha } }),
    packet,
  ],
  "a manifest": [
    manifestText([
      { path: "data/a", sha256: sha },
      { path: "data/b %", sha256: sha },
    ]),
    (text) => void parseManifest(text, "p", "m", 10),
  ],
  "what a bag says of itself": [
    bagInfoText({ bytes: 3, files: 1 }, { "Bag-Software-Agent": "x" }),
    (text) => void parseBagInfo(text, "p"),
  ],
};

const ODD = ["null", "-1", "1e308", "[]", "{}", '""', "true", '"__proto__"', '"constructor"', "99999999999999999999"];

function mutated(text: string, random: SeededRandom): string {
  let result = text;
  for (let times = 1 + random.below(3); times > 0; times -= 1) {
    const at = random.below(result.length);
    const kind = random.below(4);
    if (kind === 0) result = result.slice(0, at) + result.slice(at + 1 + random.below(6));
    else if (kind === 1) result = result.slice(0, at) + String.fromCharCode(random.below(300)) + result.slice(at);
    else {
      const places = [...result.matchAll(/(?<=[:,[])(-?\d+(\.\d+)?|"[^"]*"|true|false|null)/g)];
      const place = places[random.below(Math.max(1, places.length))];
      if (place)
        result = result.slice(0, place.index) + ODD[random.below(ODD.length)] + result.slice(place.index + place[0].length);
    }
  }
  return result;
}

describe("files of studies and packets that were mutated", () => {
  it.each(Object.entries(SAMPLES))("as %s are read or refused with a tag and a place, never a fault", (_, [text, read]) => {
    read(text);
    let refused = 0;
    for (let seed = 0; seed < 500; seed += 1) {
      const changed = mutated(text, new SeededRandom(seed));
      try {
        read(changed);
      } catch (error) {
        expect(isTautlineError(error, "unreadable-input"), `seed ${seed}: ${changed.slice(0, 300)} ${String(error)}`).toBe(true);
        refused += 1;
      }
    }
    expect(refused).toBeGreaterThan(50);
  });
});
