/**
 * Shortest augmenting path step of the assignment problem: gives the free row `row` a column, keeping the duals feasible.
 * Rows and columns may be inactive (mask 0). All arrays are mutated.
 *
 * @param size number of rows and of columns.
 * @param cost shape [size, size], row-major.
 * @param rowDual shape [size]; rowDual[row] must already satisfy rowDual[row] <= cost - columnDual for all active columns.
 * @param columnDual shape [size].
 * @param mateOfRow shape [size]: column of each row, -1 = free.
 * @param mateOfColumn shape [size]: row of each column, -1 = free.
 * @param activeColumn shape [size]; at least one active column must be free.
 * @param scratch from {@link assignmentScratch}.
 * @source Jonker & Volgenant, Computing 1987;38:325-340 (augmentation phase)
 */
export function augmentRow(
  size: number,
  cost: Float64Array,
  rowDual: Float64Array,
  columnDual: Float64Array,
  mateOfRow: Int32Array,
  mateOfColumn: Int32Array,
  activeColumn: Uint8Array,
  row: number,
  scratch: AssignmentScratch,
): void {
  const { least, previous, done } = scratch;
  least.fill(Number.POSITIVE_INFINITY);
  done.fill(0);
  let current = row;
  let reached = 0;
  let arrived = -1;
  for (;;) {
    let next = -1;
    let nextLeast = Number.POSITIVE_INFINITY;
    const at = current * size;
    const offset = reached - rowDual[current]!;
    for (let j = 0; j < size; j++) {
      if (done[j] || !activeColumn[j]) continue;
      const through = cost[at + j]! - columnDual[j]! + offset;
      if (through < least[j]!) {
        least[j] = through;
        previous[j] = current;
      }
      if (least[j]! < nextLeast || (least[j]! === nextLeast && mateOfColumn[j]! < 0)) {
        nextLeast = least[j]!;
        next = j;
      }
    }
    done[next] = 1;
    reached = nextLeast;
    if (mateOfColumn[next]! < 0) {
      arrived = next;
      break;
    }
    current = mateOfColumn[next]!;
  }
  for (let j = 0; j < size; j++) {
    if (!done[j] || j === arrived) continue;
    const gain = reached - least[j]!;
    columnDual[j]! -= gain;
    rowDual[mateOfColumn[j]!]! += gain;
  }
  rowDual[row]! += reached;
  let column = arrived;
  for (;;) {
    const from = previous[column]!;
    mateOfColumn[column] = from;
    const before = mateOfRow[from]!;
    mateOfRow[from] = column;
    if (from === row) return;
    column = before;
  }
}

export interface AssignmentScratch {
  readonly least: Float64Array;
  readonly previous: Int32Array;
  readonly done: Uint8Array;
}

/** Scratch arrays for {@link augmentRow}. */
export function assignmentScratch(size: number): AssignmentScratch {
  return { least: new Float64Array(size), previous: new Int32Array(size), done: new Uint8Array(size) };
}

/**
 * The one-to-one map of greatest total gain between rows and columns; pairs with no gain are left out.
 * @param gain shape [rows, columns], row-major, values >= 0.
 * @returns column of each row, -1 = none; shape [rows]. Complexity O(n^3), n the larger side.
 */
export function bestMatching(rows: number, columns: number, gain: Float64Array): Int32Array {
  const size = Math.max(rows, columns);
  const cost = new Float64Array(size * size);
  for (let i = 0; i < rows; i++) for (let j = 0; j < columns; j++) cost[i * size + j] = -gain[i * columns + j]!;
  const rowDual = new Float64Array(size);
  const columnDual = new Float64Array(size);
  const mateOfRow = new Int32Array(size).fill(-1);
  const mateOfColumn = new Int32Array(size).fill(-1);
  const active = new Uint8Array(size).fill(1);
  const scratch = assignmentScratch(size);
  for (let i = 0; i < size; i++) {
    let least = Number.POSITIVE_INFINITY;
    for (let j = 0; j < size; j++) least = Math.min(least, cost[i * size + j]! - columnDual[j]!);
    rowDual[i] = least;
    augmentRow(size, cost, rowDual, columnDual, mateOfRow, mateOfColumn, active, i, scratch);
  }
  const out = new Int32Array(rows).fill(-1);
  for (let i = 0; i < rows; i++) {
    const j = mateOfRow[i]!;
    if (j < columns && gain[i * columns + j]! > 0) out[i] = j;
  }
  return out;
}
