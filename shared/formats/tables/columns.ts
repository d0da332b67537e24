/** One column of a table: its name (with the unit where it has one), unit and meaning. */
export interface Column {
  readonly name: string;
  readonly unit: string;
  readonly meaning: string;
}

const column = (name: string, unit: string, meaning: string): Column => ({ name, unit, meaning });

/** Columns of every table, in order; `columns.csv` is made from this. */
export const COLUMNS = {
  nodes: [
    column("id", "", "Id of the node, unique in the file."),
    column("tree", "", "Id of its tree."),
    column("tree_name", "", "Name of its tree."),
    column("kind", "", "origin, fork, waypoint, insertion, muscle-end, wall-end, ruptured, cut, lost-end, scan-edge or open."),
    column("x_mm", "mm", "Place, first axis of the frame."),
    column("y_mm", "mm", "Place, second axis of the frame."),
    column("z_mm", "mm", "Place, third axis of the frame."),
    column("certainty", "", "sure or doubtful; empty means sure."),
    column("site", "", "Of an origin: head, wall, unseen or scan-edge."),
    column("muscle", "", "antero-lateral or postero-medial."),
    column("head", "", "Number of the papillary muscle head."),
    column("leaflet", "", "Of an insertion: anterior, posterior or commissure."),
    column("segment", "", "Of an insertion: A1 to A3, P1 to P3, AC or PC."),
    column("zone", "", "Of an insertion: free-edge, rough or base."),
    column("cleft", "", "true when the insertion lies in a cleft."),
    column("path_length_mm", "mm", "From the tree's origin along the strands; empty where the origin does not reach."),
    column("straight_length_mm", "mm", "Direct distance from the tree's origin."),
    column(
      "straightness_angle_deg",
      "degrees",
      "At a fork of two: between the incoming strand and the bisector of the outgoing ones.",
    ),
    column("branching_angle_deg", "degrees", "At a fork of two: between the two outgoing strands."),
  ],
  strands: [
    column("id", "", "Id of the strand or cross-link, unique in the file."),
    column("tree", "", "Id of its tree; empty for a cross-link."),
    column("tree_name", "", "Name of its tree."),
    column("kind", "", "strand or cross-link."),
    column("from", "", "Id of the node it begins at."),
    column("to", "", "Id of the node it ends at."),
    column("strut", "", "true for a strut."),
    column("certainty", "", "sure or doubtful; empty means sure."),
    column("traced", "", "true when it has a centreline."),
    column("length_mm", "mm", "Sum of the distances between consecutive points."),
    column("straight_length_mm", "mm", "Direct distance between its nodes."),
    column("slack", "1", "Length / straight length - 1."),
    column("mean_radius_mm", "mm", "Weighted by length, without one local diameter at both ends; empty when nothing is left."),
    column("min_radius_mm", "mm", "Least radius of the same points."),
    column("max_radius_mm", "mm", "Greatest radius of the same points."),
    column("mean_area_mm2", "mm2", "Mean cross-section of the same points."),
    column("order", "1", "Branch order: 1 at the origin, one more beyond each fork."),
    column("trunk", "", "true when more than one end hangs on it."),
    column("image_fit", "1", "How well it follows a string in the scan, 0 to 1."),
  ],
  trees: [
    column("id", "", "Id of the tree, unique in the file."),
    column("name", "", "Name of the tree."),
    column("root", "", "Id of the node at its origin; empty when it has none."),
    column("length_mm", "mm", "Sum of its strands' lengths."),
    column("strands", "1", "Number of strands."),
    column("forks", "1", "Number of forks."),
    column("ends", "1", "Number of ends."),
  ],
} as const satisfies Record<string, readonly Column[]>;

export type TableName = keyof typeof COLUMNS;
