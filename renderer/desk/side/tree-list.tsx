import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { TreeSwatch } from "#renderer/desk/side/tree-swatch.tsx";
import { mmText } from "#renderer/editor/session/words.ts";
import type { Muscle, Tree, TreeDocument } from "#shared/trees/document.ts";
import { NAME_PREFIX } from "#shared/trees/names.ts";

interface Row {
  readonly tree: Tree;
  readonly ends: number;
  readonly open: number;
  readonly doubts: number;
  readonly strut: boolean;
}

interface Group {
  readonly title: string;
  readonly rows: readonly Row[];
}

/** Trees by muscle head; each row says its length, its ends, and what is open or doubtful. */
export function TreeList({ model }: { readonly model: DeskModel }) {
  const { editor, section } = model;
  const document = editor.document.value;
  const lengths = new Map(model.measures.value.trees.map((tree) => [tree.id, tree.length]));
  const selected = editor.selection.value.tree;
  if (document.trees.size === 0) {
    return (
      <p class="empty">
        No tree yet. Find a papillary muscle on the section, and click where a string leaves it: that is the origin of the first
        tree.
      </p>
    );
  }
  return (
    <>
      {groupsOf(document).map((group) => (
        <section key={group.title} class="tree-group">
          <h3>{group.title}</h3>
          <ul>
            {group.rows.map(({ tree, ends, open, doubts, strut }) => (
              <li key={tree.id}>
                <button
                  type="button"
                  class="tree-row"
                  aria-pressed={selected === tree.id}
                  onClick={() => {
                    editor.selection.value = { tree: tree.id };
                    const at = tree.root === null ? undefined : document.nodes.get(tree.root)?.position;
                    if (at !== undefined) section.goTo(at);
                  }}
                >
                  <TreeSwatch tree={tree.id} />
                  <span class="tree-name">{tree.name}</span>
                  <span class="tree-marks">
                    {strut ? <span class="mark">strut</span> : null}
                    {open > 0 ? <span class="mark warn">{open} open</span> : null}
                    {doubts > 0 ? <span class="mark">{doubts} ?</span> : null}
                  </span>
                  <span class="figures soft">{ends === 1 ? "1 end" : `${ends} ends`}</span>
                  <span class="figures tree-length">{mmText(lengths.get(tree.id) ?? 0)}</span>
                </button>
              </li>
            ))}
          </ul>
        </section>
      ))}
    </>
  );
}

function groupsOf(document: TreeDocument): Group[] {
  const groups = new Map<string, { title: string; rank: string; rows: Row[] }>();
  for (const tree of document.trees.values()) {
    const root = tree.root === null ? undefined : document.nodes.get(tree.root);
    const title = titleOf(root?.muscle, root?.head, root === undefined ? "unrooted" : (root.site ?? "head"));
    const rank = root?.muscle === undefined ? `z${title}` : title;
    const group = groups.get(title) ?? { title, rank, rows: [] };
    group.rows.push(rowOf(document, tree));
    groups.set(title, group);
  }
  const sorted = [...groups.values()].sort((a, b) => a.rank.localeCompare(b.rank, "en", { numeric: true }));
  for (const group of sorted) group.rows.sort((a, b) => a.tree.name.localeCompare(b.tree.name, "en", { numeric: true }));
  return sorted;
}

function titleOf(muscle: Muscle | undefined, head: number | undefined, site: string): string {
  if (site === "unrooted") return "Without an origin";
  if (muscle === undefined) return site === "wall" ? "From the ventricular wall" : "Muscle not said";
  return head === undefined ? `${NAME_PREFIX[muscle]}` : `${NAME_PREFIX[muscle]} head ${head}`;
}

function rowOf(document: TreeDocument, tree: Tree): Row {
  const nodes = [...document.nodes.values()].filter((node) => node.tree === tree.id);
  const strands = [...document.strands.values()].filter((strand) => strand.tree === tree.id);
  return {
    tree,
    ends: nodes.filter((node) => !["origin", "fork", "waypoint", "open"].includes(node.kind)).length,
    open: nodes.filter((node) => node.kind === "open").length,
    doubts: [...nodes, ...strands].filter((item) => item.certainty === "doubtful").length,
    strut: strands.some((strand) => strand.strut === true),
  };
}
