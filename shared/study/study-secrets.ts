import { hmac } from "@noble/hashes/hmac.js";
import { sha256 } from "@noble/hashes/sha2.js";
import { hexToBytes } from "@noble/hashes/utils.js";
import { SeededRandom } from "#shared/random/seeded-random.ts";

const ID_ALPHABET = "0123456789abcdefghjkmnpqrstvwxyz";
/** Without letters and digits that are taken for one another, and without vowels, so that no code is a word. */
const CODE_ALPHABET = "23456789BCDFGHJKMNPQRTVWXYZ";

/**
 * 32 bytes that follow from the study's seed and the words alone; without the seed nobody can tell them from chance.
 * @param seed 64 hex digits
 * @source HMAC, RFC 2104, with SHA-256
 */
export function secretBytes(seed: string, ...words: readonly (string | number)[]): Uint8Array {
  return hmac(sha256, hexToBytes(seed), new TextEncoder().encode(words.map(String).join("\u0000")));
}

/** A stream of numbers that follows from the seed and the words alone. */
export function secretRandom(seed: string, ...words: readonly (string | number)[]): SeededRandom {
  const view = new DataView(secretBytes(seed, ...words).buffer);
  const state = [0, 4, 8, 12].map((at) => view.getUint32(at)) as [number, number, number, number];
  return SeededRandom.fromState(state);
}

/** An id of 20 characters, begins with a letter; see {@link secretBytes}. */
export function secretId(seed: string, ...words: readonly (string | number)[]): string {
  const bytes = secretBytes(seed, "id", ...words);
  return (
    ID_ALPHABET.charAt(10 + (bytes[0]! % 22)) +
    Array.from(bytes.subarray(1, 20), (byte) => ID_ALPHABET.charAt(byte % 32)).join("")
  );
}

/** A code for people, `XXXX-XXXX`; see {@link secretBytes}. Two bytes a sign: no sign is notably more frequent. */
export function secretCode(seed: string, ...words: readonly (string | number)[]): string {
  const view = new DataView(secretBytes(seed, "code", ...words).buffer);
  const signs = Array.from({ length: 8 }, (_, k) => CODE_ALPHABET.charAt(view.getUint16(2 * k) % CODE_ALPHABET.length));
  return `${signs.slice(0, 4).join("")}-${signs.slice(4).join("")}`;
}

/** The list in an order drawn from `random`; the list itself stays. @source Fisher & Yates 1938, Durstenfeld 1964 */
export function drawnOrder<T>(list: readonly T[], random: SeededRandom): T[] {
  const order = [...list];
  for (let k = order.length - 1; k > 0; k -= 1) {
    const other = random.below(k + 1);
    [order[k], order[other]] = [order[other]!, order[k]!];
  }
  return order;
}
