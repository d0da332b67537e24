import { type AssignmentScratch, assignmentScratch, augmentRow } from "#shared/compare/edit-distance/assignment.ts";
import { type EditProblem, type FlatGraph, linkBetween } from "#shared/compare/edit-distance/problem.ts";
import { halfStarCost } from "#shared/compare/edit-distance/star-cost.ts";

/** A node whose image is still open. */
export const UNDECIDED = -1;
/** A node of A that is decided to be deleted. */
export const DELETED = -2;

/**
 * A partial map with a proven lower bound of all its completions, kept up to date as nodes are decided.
 *
 * The bound: what is decided costs what it costs; every undecided node i of A may go to an unused node j of B for
 * node substitution + links to decided nodes (their images are known, so their cost is exact) + half the star cost of the
 * links still open, or be deleted; unused nodes of B may be inserted. The least total is an assignment. Its matrix holds
 * min(0, map - delete - insert), so that "delete and insert" is a zero anywhere in the row and the matrix stays square.
 * After one decision only the rows and columns beside the decided nodes change; the assignment is repaired from the duals
 * at hand instead of being solved anew.
 *
 * @source own derivation, after the anchor-aware branch bound of Chang et al., VLDB J 2023;32:97-120
 */
export class BoundState {
  readonly imageOf: Int32Array;
  readonly sourceOf: Int32Array;
  private readonly size: number;
  private readonly cost: Float64Array;
  private readonly rowDual: Float64Array;
  private readonly columnDual: Float64Array;
  readonly mateOfRow: Int32Array;
  private readonly mateOfColumn: Int32Array;
  private readonly activeRow: Uint8Array;
  private readonly activeColumn: Uint8Array;
  /** Cost of deleting (inserting) each undecided node, links to decided nodes whole, open ones half. */
  private readonly deleteCost: Float64Array;
  private readonly insertCost: Float64Array;
  private settled = 0;
  /** Proven lower bound of every completion. */
  bound = 0;

  private constructor(
    private readonly problem: EditProblem,
    private readonly work: BoundScratch,
  ) {
    const n = problem.a.size;
    const m = problem.b.size;
    this.size = Math.max(n, m, 1);
    this.imageOf = new Int32Array(n).fill(UNDECIDED);
    this.sourceOf = new Int32Array(m).fill(UNDECIDED);
    this.cost = new Float64Array(this.size * this.size);
    this.rowDual = new Float64Array(this.size);
    this.columnDual = new Float64Array(this.size);
    this.mateOfRow = new Int32Array(this.size).fill(-1);
    this.mateOfColumn = new Int32Array(this.size).fill(-1);
    this.activeRow = new Uint8Array(this.size).fill(1);
    this.activeColumn = new Uint8Array(this.size).fill(1);
    this.deleteCost = new Float64Array(n);
    this.insertCost = new Float64Array(m);
  }

  /** The state in which nothing is decided. */
  static root(problem: EditProblem): BoundState {
    const state = new BoundState(problem, boundScratch(problem));
    for (let i = 0; i < problem.a.size; i++) state.deleteCost[i] = state.openCost(problem.a, state.imageOf, i);
    for (let j = 0; j < problem.b.size; j++) state.insertCost[j] = state.openCost(problem.b, state.sourceOf, j);
    for (let i = 0; i < problem.a.size; i++) for (let j = 0; j < problem.b.size; j++) state.refreshEntry(i, j);
    for (let i = 0; i < state.size; i++) state.seatRow(i);
    state.sumUp();
    return state;
  }

  /** A state for the same problem to be filled by {@link copyFrom}. */
  spare(): BoundState {
    return new BoundState(this.problem, this.work);
  }

  copyFrom(other: BoundState): void {
    this.imageOf.set(other.imageOf);
    this.sourceOf.set(other.sourceOf);
    this.cost.set(other.cost);
    this.rowDual.set(other.rowDual);
    this.columnDual.set(other.columnDual);
    this.mateOfRow.set(other.mateOfRow);
    this.mateOfColumn.set(other.mateOfColumn);
    this.activeRow.set(other.activeRow);
    this.activeColumn.set(other.activeColumn);
    this.deleteCost.set(other.deleteCost);
    this.insertCost.set(other.insertCost);
    this.settled = other.settled;
    this.bound = other.bound;
  }

  /** Decides that node `i` of A goes to node `j` of B, or is deleted (`DELETED`), and brings the bound up to date. */
  decide(i: number, j: number): void {
    if (j === DELETED) this.decideDeleted(i);
    else this.decideMapped(i, j);
    this.sumUp();
  }

  /** Cheap lower bound of deciding i -> j from the duals at hand, without repairing the assignment. */
  quickBound(i: number, j: number): number {
    if (j === DELETED) {
      let least = Number.POSITIVE_INFINITY;
      for (let c = 0; c < this.size; c++)
        if (this.activeColumn[c]) least = Math.min(least, -this.rowDual[i]! - this.columnDual[c]!);
      return this.bound + Math.max(0, least);
    }
    const forced = this.pairCost(i, j) - this.deleteCost[i]! - this.insertCost[j]!;
    return this.bound + Math.max(0, forced - this.rowDual[i]! - this.columnDual[j]!);
  }

  /** True when mapping i to j costs less, in the bound, than deleting one and inserting the other. */
  isGain(i: number, j: number): boolean {
    return this.cost[i * this.size + j]! < 0;
  }

  private decideMapped(i: number, j: number): void {
    const { a, b } = this.problem;
    this.settled += this.anchoredCost(i, j);
    this.imageOf[i] = j;
    this.sourceOf[j] = i;
    const widowedRow = this.mateOfColumn[j]!;
    const widowedColumn = this.mateOfRow[i]!;
    this.activeRow[i] = 0;
    this.activeColumn[j] = 0;
    if (widowedColumn !== j) {
      this.mateOfRow[widowedRow] = -1;
      this.mateOfColumn[widowedColumn] = -1;
    }
    const changedColumns: number[] = [];
    for (let at = b.offset[j]!; at < b.offset[j + 1]!; at++) {
      const other = b.neighbour[at]!;
      if (this.sourceOf[other] !== UNDECIDED) continue;
      this.insertCost[other]! += b.linkCost[b.viaLink[at]!]! / 2;
      changedColumns.push(other);
    }
    this.refreshAfter(this.openNeighbours(a, i), changedColumns, widowedColumn === j ? -1 : widowedRow);
  }

  private decideDeleted(i: number): void {
    this.settled += this.deleteCost[i]! - this.openShare(i);
    this.imageOf[i] = DELETED;
    for (let j = 0; j < this.size; j++) this.cost[i * this.size + j] = 0;
    this.refreshAfter(this.openNeighbours(this.problem.a, i), [], i);
  }

  /** Undecided neighbours of node i of A, their links to it now counted whole. */
  private openNeighbours(a: FlatGraph, i: number): number[] {
    const rows: number[] = [];
    for (let at = a.offset[i]!; at < a.offset[i + 1]!; at++) {
      const other = a.neighbour[at]!;
      if (this.imageOf[other] !== UNDECIDED) continue;
      this.deleteCost[other]! += a.linkCost[a.viaLink[at]!]! / 2;
      rows.push(other);
    }
    return rows;
  }

  /** Half the links of a node to undecided nodes: they are counted whole at those nodes once it is decided. */
  private openShare(i: number): number {
    const { a } = this.problem;
    let share = 0;
    for (let at = a.offset[i]!; at < a.offset[i + 1]!; at++)
      if (this.imageOf[a.neighbour[at]!] === UNDECIDED) share += a.linkCost[a.viaLink[at]!]! / 2;
    return share;
  }

  /** Recomputes changed rows and columns and seats every row that lost its column. */
  private refreshAfter(rows: readonly number[], columns: readonly number[], alsoFree: number): void {
    const { size, activeRow, activeColumn } = this;
    for (const i of rows) for (let j = 0; j < this.problem.b.size; j++) if (activeColumn[j]) this.refreshEntry(i, j);
    for (const j of columns)
      for (let i = 0; i < this.problem.a.size; i++) if (activeRow[i] && this.imageOf[i] === UNDECIDED) this.refreshEntry(i, j);
    const free = new Set(rows);
    if (alsoFree >= 0) free.add(alsoFree);
    for (const j of columns) {
      let least = Number.POSITIVE_INFINITY;
      for (let i = 0; i < size; i++)
        if (activeRow[i] && !free.has(i)) least = Math.min(least, this.cost[i * size + j]! - this.rowDual[i]!);
      this.columnDual[j] = least === Number.POSITIVE_INFINITY ? 0 : least;
      const mate = this.mateOfColumn[j]!;
      if (mate >= 0 && !free.has(mate) && this.cost[mate * size + j]! - this.rowDual[mate]! > this.columnDual[j]! + 1e-12)
        free.add(mate);
    }
    for (const i of free) this.unseat(i);
    for (const i of free) this.seatRow(i);
  }

  private unseat(i: number): void {
    const column = this.mateOfRow[i]!;
    if (column >= 0) this.mateOfColumn[column] = -1;
    this.mateOfRow[i] = -1;
  }

  private seatRow(i: number): void {
    let least = Number.POSITIVE_INFINITY;
    for (let j = 0; j < this.size; j++)
      if (this.activeColumn[j]) least = Math.min(least, this.cost[i * this.size + j]! - this.columnDual[j]!);
    this.rowDual[i] = least;
    augmentRow(
      this.size,
      this.cost,
      this.rowDual,
      this.columnDual,
      this.mateOfRow,
      this.mateOfColumn,
      this.activeColumn,
      i,
      this.work.assignment,
    );
  }

  private sumUp(): void {
    let sum = this.settled;
    for (let i = 0; i < this.problem.a.size; i++) if (this.imageOf[i] === UNDECIDED) sum += this.deleteCost[i]!;
    for (let j = 0; j < this.problem.b.size; j++) if (this.sourceOf[j] === UNDECIDED) sum += this.insertCost[j]!;
    for (let i = 0; i < this.size; i++) if (this.activeRow[i]) sum += this.cost[i * this.size + this.mateOfRow[i]!]!;
    this.bound = sum;
  }

  private refreshEntry(i: number, j: number): void {
    const saved = this.pairCost(i, j) - this.deleteCost[i]! - this.insertCost[j]!;
    this.cost[i * this.size + j] = Math.min(saved, 0);
  }

  /** Cost of mapping i to j: the node, links to decided nodes exactly, half the star of open links. */
  private pairCost(i: number, j: number): number {
    const { a, b } = this.problem;
    const { linksA, linksB } = this.work;
    let [countA, countB] = [0, 0];
    for (let at = a.offset[i]!; at < a.offset[i + 1]!; at++)
      if (this.imageOf[a.neighbour[at]!] === UNDECIDED) linksA[countA++] = a.viaLink[at]!;
    for (let at = b.offset[j]!; at < b.offset[j + 1]!; at++)
      if (this.sourceOf[b.neighbour[at]!] === UNDECIDED) linksB[countB++] = b.viaLink[at]!;
    const star = halfStarCost(linksA, countA, linksB, countB, this.problem.linkSubstitution, b.links, a.linkCost, b.linkCost);
    return this.anchoredCost(i, j) + star;
  }

  /** Cost of mapping i to j as far as decided nodes are concerned. */
  private anchoredCost(i: number, j: number): number {
    const { a, b, linkSubstitution } = this.problem;
    let cost = this.problem.nodeSubstitution[i * b.size + j]!;
    for (let at = a.offset[i]!; at < a.offset[i + 1]!; at++) {
      const image = this.imageOf[a.neighbour[at]!]!;
      if (image === UNDECIDED) continue;
      const link = image === DELETED ? -1 : linkBetween(b, j, image);
      cost += link < 0 ? a.linkCost[a.viaLink[at]!]! : linkSubstitution[a.viaLink[at]! * b.links + link]!;
    }
    for (let at = b.offset[j]!; at < b.offset[j + 1]!; at++) {
      const source = this.sourceOf[b.neighbour[at]!]!;
      if (source !== UNDECIDED && linkBetween(a, i, source) < 0) cost += b.linkCost[b.viaLink[at]!]!;
    }
    return cost;
  }

  /** Cost of deleting (inserting) node i with half of all its links, as nothing is decided yet. */
  private openCost(graph: FlatGraph, decided: Int32Array, i: number): number {
    let cost = graph.nodeCost[i]!;
    for (let at = graph.offset[i]!; at < graph.offset[i + 1]!; at++)
      cost += graph.linkCost[graph.viaLink[at]!]! / (decided[graph.neighbour[at]!] === UNDECIDED ? 2 : 1);
    return cost;
  }
}

interface BoundScratch {
  readonly assignment: AssignmentScratch;
  readonly linksA: Int32Array;
  readonly linksB: Int32Array;
}

function boundScratch(problem: EditProblem): BoundScratch {
  const most = (graph: FlatGraph) =>
    graph.offset.reduce((max, at, i) => Math.max(max, i === 0 ? 0 : at - graph.offset[i - 1]!), 0);
  return {
    assignment: assignmentScratch(Math.max(problem.a.size, problem.b.size, 1)),
    linksA: new Int32Array(most(problem.a)),
    linksB: new Int32Array(most(problem.b)),
  };
}
