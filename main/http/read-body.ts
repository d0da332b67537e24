import { refuse, type Shape } from "#main/http/shape.ts";
import { TautlineError } from "#shared/errors.ts";

/** Largest JSON body of an ordinary request, bytes. */
export const JSON_LIMIT_BYTES = 16 * 1024 * 1024;
/** Largest body that carries lines of a log, bytes. */
export const LOG_LIMIT_BYTES = 256 * 1024 * 1024;

/** The request's JSON body as `shape` gives it; an empty body counts as {}. @throws bad-request */
export async function readJson<T>(request: Request, shape: Shape<T>, limitBytes = JSON_LIMIT_BYTES): Promise<T> {
  const bytes = await readLimited(request, limitBytes);
  if (bytes.length === 0) return shape({}, "body");
  let value: unknown;
  try {
    value = JSON.parse(new TextDecoder("utf-8", { fatal: true }).decode(bytes));
  } catch {
    throw refuse("body", "JSON in UTF-8", `${bytes.length} bytes that are not`);
  }
  return shape(value, "body");
}

/** The request's body as bytes. @throws bad-request when there are more than the limit */
export function readBytes(request: Request, limitBytes: number): Promise<Uint8Array> {
  return readLimited(request, limitBytes);
}

/** The body's bytes; stops reading as soon as there are more than the limit, whatever the header said. */
async function readLimited(request: Request, limitBytes: number): Promise<Uint8Array> {
  if (Number(request.headers.get("content-length") ?? 0) > limitBytes) throw tooLarge(limitBytes);
  if (!request.body) return new Uint8Array(0);
  const reader = request.body.getReader();
  const pieces: Uint8Array[] = [];
  let total = 0;
  for (;;) {
    const { done, value } = await reader.read();
    if (done) break;
    total += value.length;
    if (total > limitBytes) {
      await reader.cancel().catch(() => undefined);
      throw tooLarge(limitBytes);
    }
    pieces.push(value);
  }
  const bytes = new Uint8Array(total);
  let at = 0;
  for (const piece of pieces) {
    bytes.set(piece, at);
    at += piece.length;
  }
  return bytes;
}

function tooLarge(limitBytes: number): TautlineError<"bad-request"> {
  const what = `a body of at most ${limitBytes} bytes was expected, found more`;
  return new TautlineError("bad-request", `The request is too large: ${what}.`, { what, where: "body" });
}
