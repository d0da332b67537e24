import { matching, text } from "#main/http/shape.ts";

/** A path on this computer; the shell's own folders rule decides whether it may be read. */
export const path = text(4096, 1);

/** What a person types into one line; control characters would break lists and reports. */
export const line = (most: number) =>
  matching(new RegExp(`^[^\\u0000-\\u001f\\u007f]{1,${most}}$`, "u"), `one line of 1 to ${most} characters`);

export const sha256 = matching(/^[0-9a-f]{64}$/, "a SHA-256 in hexadecimal");
