import { COMMON_HEADERS } from "#main/http/headers.ts";
import { encodeFrame } from "#shared/api/frame.ts";
import { ERROR_HEADER } from "#shared/api/routes.ts";
import { encodeError, STATUS_OF_TAG } from "#shared/errors.ts";

/** A JSON answer. */
export function jsonAnswer(value: unknown, status = 200, more: Record<string, string> = {}): Response {
  return new Response(JSON.stringify(value), {
    status,
    headers: { ...COMMON_HEADERS, "content-type": "application/json; charset=utf-8", ...more },
  });
}

/** An answer of bytes. */
export function bytesAnswer(bytes: Uint8Array<ArrayBuffer>, type: string, more: Record<string, string> = {}): Response {
  return new Response(bytes, {
    headers: { ...COMMON_HEADERS, "content-type": type, "content-length": String(bytes.length), ...more },
  });
}

/** A binary frame as an answer. */
export function frameAnswer<Header>(frame: { header: Header; body: Uint8Array }): Response {
  return bytesAnswer(encodeFrame(frame.header, frame.body), "application/octet-stream");
}

/** The answer for anything thrown: the tag's status and header, and tag, fields and sentence; never a stack. */
export function errorAnswer(error: unknown, status?: number, more: Record<string, string> = {}): Response {
  const body = encodeError(error);
  return jsonAnswer(body, status ?? STATUS_OF_TAG[body.tag], { [ERROR_HEADER]: body.tag, ...more });
}
