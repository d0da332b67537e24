export interface Rect {
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

/** Where the parts of the strip stand, CSS pixels. All share the same rows: arc length runs from the bottom to the top. */
export interface StripLayout {
  readonly axis: Rect;
  readonly strip: Rect;
  readonly profile: Rect;
  readonly film: Rect;
  readonly filmCount: number;
}

const AXIS_PX = 34;
const GAP_PX = 8;
const WORD_PX = 20;
const FILM_GAP_PX = 3;
const LEAST_STRIP_PX = 40;

export function stripLayout(width: number, height: number): StripLayout {
  const y = WORD_PX;
  const rows = Math.max(0, height - 2 * WORD_PX);
  const room = Math.max(0, width - AXIS_PX - 3 * GAP_PX);
  const wanted = Math.max(0, Math.min(96, Math.floor(room * 0.3), rows));
  const profileWidth = Math.min(90, Math.floor(room * 0.28));
  // A narrow pane gives up the film first, then the profile keeps what the strip can spare.
  const side = room - wanted - profileWidth < LEAST_STRIP_PX ? 0 : wanted;
  const stripWidth = Math.max(0, room - side - profileWidth);
  const axis = { x: 0, y, width: AXIS_PX, height: rows };
  const strip = { x: AXIS_PX, y, width: stripWidth, height: rows };
  const profile = { x: strip.x + stripWidth + GAP_PX, y, width: profileWidth, height: rows };
  const film = { x: profile.x + profileWidth + GAP_PX, y, width: side, height: rows };
  return {
    axis,
    strip,
    profile,
    film,
    filmCount: side < 16 ? 0 : Math.max(1, Math.floor((rows + FILM_GAP_PX) / (side + FILM_GAP_PX))),
  };
}

/** Row of an arc length: 0 at the bottom edge of `rect`. */
export function rowOf(rect: Rect, atMm: number, lengthMm: number): number {
  return rect.y + rect.height * (1 - (lengthMm === 0 ? 0 : atMm / lengthMm));
}

/** Arc length at a row, kept within the strand. */
export function arcAt(rect: Rect, y: number, lengthMm: number): number {
  const share = rect.height === 0 ? 0 : 1 - (y - rect.y) / rect.height;
  return Math.min(1, Math.max(0, share)) * lengthMm;
}

/**
 * Top left corners of the film's squares, from the first section (bottom) to the last (top): at the rows of their arc
 * lengths, moved just enough to stay inside and apart.
 */
export function filmSquares(film: Rect, at: readonly number[], lengthMm: number): { x: number; y: number; side: number }[] {
  const side = film.width;
  const squares = at.map((mm) => ({ x: film.x, y: rowOf(film, mm, lengthMm) - side / 2, side }));
  const top = film.y;
  const bottom = film.y + film.height - side;
  let ceiling = bottom;
  for (const square of squares) {
    square.y = Math.min(square.y, ceiling);
    ceiling = square.y - side - FILM_GAP_PX;
  }
  let floor = top;
  for (const square of [...squares].reverse()) {
    square.y = Math.max(square.y, floor);
    floor = square.y + side + FILM_GAP_PX;
  }
  return squares;
}

/** Arc length that a place on the pane stands for: on the film its nearest section's, elsewhere the row's. */
export function arcAtPlace(layout: StripLayout, at: readonly number[], x: number, y: number, lengthMm: number): number {
  if (at.length === 0 || layout.film.width === 0 || x < layout.film.x) return arcAt(layout.strip, y, lengthMm);
  const squares = filmSquares(layout.film, at, lengthMm);
  const off = (i: number) => Math.abs(squares[i]!.y + squares[i]!.side / 2 - y);
  return at[squares.reduce((best, _square, i) => (off(i) < off(best) ? i : best), 0)]!;
}

/** Round marks for an axis: 1, 2 or 5 times a power of ten apart, not nearer together than `leastPx`. */
export function axisMarks(lengthMm: number, heightPx: number, leastPx: number): number[] {
  if (!(lengthMm > 0) || !(heightPx > 0)) return [];
  const least = (leastPx * lengthMm) / heightPx;
  const ten = 10 ** Math.floor(Math.log10(least));
  const step = [1, 2, 5, 10].map((k) => k * ten).find((mm) => mm >= least * (1 - 1e-9)) ?? 10 * ten;
  const count = Math.floor(lengthMm / step + 1e-9);
  return Array.from({ length: count + 1 }, (_, k) => Number((k * step).toPrecision(12)));
}
