/**
 * Every expected failure of the program is one of these tags with typed fields; they cross HTTP, the bridge and the
 * command line unchanged. A message says what was expected, what was found, where, and what to do next.
 */
export interface ErrorFields {
  /** A file or folder that cannot be read as what it claims to be. */
  "unreadable-input": { file: string; expected: string; found: string; where?: string; next?: string };
  /** Wrong use of a command, option or request. */
  misuse: { what: string; next?: string };
  /** A request whose body does not have the agreed shape. */
  "bad-request": { what: string; where: string };
  "not-found": { what: string; id: string };
  /** A newer request of the same lane made this one pointless; never shown, never logged. */
  superseded: { lane: string; number: number };
  /** The person, or the end of the process, stopped the work. */
  cancelled: { what: string };
  /** Voxel size or unit not settled by the header nor by the person. */
  "spacing-unsettled": { file: string; found: string };
  /** Trees, or a file, belong to another scan. */
  "other-scan": { file: string; expected: string; found: string };
  /** The same record was changed elsewhere in between. */
  conflict: { what: string; expected: string; found: string };
  /** Somebody else holds the library or the pass for writing. */
  "held-elsewhere": { what: string; holder: string };
  "write-failed": { file: string; reason: string; next?: string };
  "disk-full": { file: string; needed: number; free: number };
  /** The page's token is not this run's. */
  "token-refused": { reason: string };
  /** A fault of the program itself. */
  internal: { what: string };
}

export type ErrorTag = keyof ErrorFields;

/** The body of an error on every boundary: tag, fields and the sentence a person reads. */
export interface ErrorBody<T extends ErrorTag = ErrorTag> {
  tag: T;
  message: string;
  fields: ErrorFields[T];
}

/** An expected failure. `tag` tells which, `fields` carry its facts, `message` is the sentence to show. */
export class TautlineError<T extends ErrorTag = ErrorTag> extends Error {
  override readonly name = "TautlineError";
  readonly tag: T;
  readonly fields: ErrorFields[T];

  constructor(tag: T, message: string, fields: ErrorFields[T], cause?: unknown) {
    super(message, cause === undefined ? undefined : { cause });
    this.tag = tag;
    this.fields = fields;
  }
}

/** True when `value` is a {@link TautlineError}, of the given tag when one is named. */
export function isTautlineError<T extends ErrorTag>(value: unknown, tag?: T): value is TautlineError<T> {
  return value instanceof TautlineError && (tag === undefined || value.tag === tag);
}

/**
 * The one sentence for unreadable input, built from its facts so that no reader words it differently.
 * @param next what the person can do; left out when nothing useful can be said.
 */
export function unreadable(
  file: string,
  expected: string,
  found: string,
  where?: string,
  next?: string,
): TautlineError<"unreadable-input"> {
  const place = where ? ` (${where})` : "";
  const advice = next ? ` ${next}` : "";
  const fields: ErrorFields["unreadable-input"] = { file, expected, found };
  if (where) fields.where = where;
  if (next) fields.next = next;
  return new TautlineError("unreadable-input", `${file}${place}: expected ${expected}, found ${found}.${advice}`, fields);
}

/**
 * HTTP status of each tag; the one table both shells use. What a newer request made pointless is no failure, and browsers would
 * log every status from 400 as one: such an answer is told by its header (`ERROR_HEADER`).
 */
export const STATUS_OF_TAG: Readonly<Record<ErrorTag, number>> = {
  "unreadable-input": 422,
  misuse: 400,
  "bad-request": 400,
  "not-found": 404,
  superseded: 200,
  cancelled: 409,
  "spacing-unsettled": 422,
  "other-scan": 409,
  conflict: 409,
  "held-elsewhere": 423,
  "write-failed": 507,
  "disk-full": 507,
  "token-refused": 401,
  internal: 500,
};

/** Exit code of each tag on the command line: 2 misuse or unreadable input, 3 could not finish, 130 interrupted. */
export const EXIT_OF_TAG: Readonly<Record<ErrorTag, number>> = {
  "unreadable-input": 2,
  misuse: 2,
  "bad-request": 2,
  "not-found": 2,
  superseded: 3,
  cancelled: 130,
  "spacing-unsettled": 2,
  "other-scan": 2,
  conflict: 3,
  "held-elsewhere": 3,
  "write-failed": 3,
  "disk-full": 3,
  "token-refused": 3,
  internal: 3,
};

/** Body to send for any thrown value. Anything that is not a {@link TautlineError} becomes `internal`, without its stack. */
export function encodeError(error: unknown): ErrorBody {
  if (isTautlineError(error)) return { tag: error.tag, message: error.message, fields: error.fields };
  return {
    tag: "internal",
    message: "The program met a fault of its own. Nothing that was saved is lost.",
    fields: { what: "internal" },
  };
}

/** The error a received body stands for; a body of an unknown tag becomes `internal` with its message kept. */
export function decodeError(body: unknown): TautlineError {
  if (typeof body === "object" && body !== null) {
    const { tag, message, fields } = body as { tag?: unknown; message?: unknown; fields?: unknown };
    if (typeof tag === "string" && Object.hasOwn(STATUS_OF_TAG, tag) && typeof message === "string") {
      return new TautlineError(tag as ErrorTag, message, (fields ?? {}) as ErrorFields[ErrorTag]);
    }
  }
  return new TautlineError("internal", "The answer was not understood.", { what: "undecodable error body" });
}
