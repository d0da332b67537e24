/** Base64 text of bytes. */
export function toBase64(bytes: Uint8Array): string {
  const parts: string[] = [];
  // A multiple of three bytes a part, so that the parts join without padding; small enough for one call's arguments.
  for (let at = 0; at < bytes.length; at += 0x6000) parts.push(btoa(String.fromCharCode(...bytes.subarray(at, at + 0x6000))));
  return parts.join("");
}

/** The bytes of a base64 text, white space ignored; null when it is not base64. */
export function fromBase64(text: string): Uint8Array<ArrayBuffer> | null {
  try {
    const decoded = atob(text.replace(/\s+/g, ""));
    const bytes = new Uint8Array(decoded.length);
    for (let i = 0; i < decoded.length; i++) bytes[i] = decoded.charCodeAt(i);
    return bytes;
  } catch {
    return null;
  }
}
