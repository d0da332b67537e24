import { TautlineError } from "#shared/errors.ts";

/** A binary answer: uint32 little-endian header length, UTF-8 JSON header, body. */
export interface BinaryFrame<Header> {
  readonly header: Header;
  readonly body: Uint8Array;
}

/** Bytes of a frame; the body is copied (views over shared memory cannot be sent). */
export function encodeFrame<Header>(header: Header, body: Uint8Array): Uint8Array<ArrayBuffer> {
  const head = new TextEncoder().encode(JSON.stringify(header));
  const bytes = new Uint8Array(4 + head.length + body.length);
  new DataView(bytes.buffer).setUint32(0, head.length, true);
  bytes.set(head, 4);
  bytes.set(body, 4 + head.length);
  return bytes;
}

/** The frame in `bytes`; its body is a view into them. @throws bad-request when the bytes are shorter than they say. */
export function decodeFrame<Header>(bytes: Uint8Array): BinaryFrame<Header> {
  const length = bytes.length >= 4 ? new DataView(bytes.buffer, bytes.byteOffset).getUint32(0, true) : Number.POSITIVE_INFINITY;
  if (4 + length > bytes.length) {
    throw new TautlineError("bad-request", `A binary answer of ${bytes.length} bytes ends inside its header.`, {
      what: "truncated frame",
      where: "frame header",
    });
  }
  const header = JSON.parse(new TextDecoder().decode(bytes.subarray(4, 4 + length))) as Header;
  return { header, body: bytes.subarray(4 + length) };
}
