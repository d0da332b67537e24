// The table of layers in DEVELOPERS.md as rules. A folder may import itself and what its row names, nothing else.
const PURE_PACKAGES = [
  "@noble/hashes",
  "@stdlib/stats-base-dists-chisquare-quantile",
  "@stdlib/stats-base-dists-f-quantile",
  "@stdlib/stats-base-dists-normal-cdf",
  "@stdlib/stats-base-dists-normal-quantile",
  "@stdlib/stats-base-dists-t-quantile",
  "fast-xml-parser",
  "fflate",
  "flatqueue",
];

/** Import paths a layer may reach besides its own; package names stand as npm names. */
const LAYERS = [
  { name: "shared", path: "^shared/", may: [], packages: PURE_PACKAGES, node: false },
  { name: "http", path: "^main/http/", may: ["^shared/"], packages: ["hono"], node: false },
  {
    name: "node",
    path: "^main/node/",
    may: ["^shared/", "^main/http/"],
    packages: ["@hono/node-server", "hono", "fflate"],
    node: true,
  },
  {
    name: "intake",
    path: "^main/intake/",
    may: ["^shared/"],
    packages: ["geotiff", "zarrita", "@zarrita/storage", "fflate", "itk-wasm", "@itk-wasm/image-io"],
    node: true,
  },
  { name: "engine", path: "^main/engine/", may: ["^shared/"], packages: ["zarrita", "@zarrita/storage"], node: true },
  { name: "cli", path: "^main/cli/", may: ["^shared/", "^main/(http|node|intake|engine)/"], packages: ["fflate"], node: true },
  {
    name: "electron",
    path: "^main/electron/",
    may: ["^shared/", "^main/(http|node|intake|engine|preload)/"],
    packages: ["electron"],
    node: true,
  },
  { name: "preload", path: "^main/preload/", may: ["^shared/"], packages: ["electron"], node: false },
  { name: "storage", path: "^renderer/storage/", may: ["^shared/"], packages: ["dexie"], node: false },
  { name: "client", path: "^renderer/client/", may: ["^shared/"], packages: [], node: false },
  {
    name: "editor",
    path: "^renderer/editor/",
    may: ["^shared/", "^renderer/(storage|client)/"],
    packages: ["@preact/signals"],
    node: false,
  },
  { name: "space", path: "^renderer/space/", may: ["^shared/"], packages: ["three"], node: false },
  { name: "section", path: "^renderer/section/", may: ["^shared/"], packages: ["three"], node: false },
  { name: "strip", path: "^renderer/strip/", may: ["^shared/"], packages: ["three"], node: false },
  {
    name: "screens",
    path: "^renderer/(desk|shelf|study|app)/",
    may: ["^shared/", "^renderer/"],
    packages: ["preact", "@preact/signals"],
    node: false,
  },
];

const escapeName = (name) => name.replace(/[/@.-]/g, (c) => `\\${c}`);

function rules(layer) {
  const from = { path: layer.path };
  const packages = layer.packages.length > 0 ? [`^node_modules/(${layer.packages.map(escapeName).join("|")})/`] : [];
  const list = [
    {
      name: `${layer.name}-imports-only-its-layers`,
      severity: "error",
      from,
      to: { dependencyTypesNot: ["core"], pathNot: [layer.path, ...layer.may, ...packages] },
    },
  ];
  if (!layer.node) list.push({ name: `${layer.name}-has-no-node`, severity: "error", from, to: { dependencyTypes: ["core"] } });
  return list;
}

module.exports = {
  forbidden: [
    ...LAYERS.flatMap(rules),
    { name: "no-cycles", severity: "error", from: {}, to: { circular: true, viaOnly: { dependencyTypesNot: ["type-only"] } } },
    { name: "nothing-unresolved", severity: "error", from: {}, to: { couldNotResolve: true } },
  ],
  options: {
    parser: "swc",
    tsPreCompilationDeps: true,
    doNotFollow: { path: "node_modules" },
    exclude: { path: "\\.bench\\.ts$" },
    enhancedResolveOptions: {
      extensions: [".ts", ".tsx", ".mjs", ".js", ".json", ".css"],
      exportsFields: ["exports"],
      conditionNames: ["import", "browser", "default", "types"],
    },
  },
};
