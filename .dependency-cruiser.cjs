/**
 * Who may import whom: architecture's table, one rule a row. A new file is guarded by its folder.
 */
const PURE = "/(schema|rules)\\.tsx?$";
const DOMAIN = [
  "ledger",
  "coverage",
  "mail",
  "evidence",
  "tickets",
  "rma",
  "dock",
  "suppliers",
  "reliability",
];
const SHARED = ["auth", "audit", "jobs", "files"];

/** Each domain module may reach these others; all the rest is forbidden. */
const MAY = {
  ledger: [],
  mail: [],
  evidence: [],
  coverage: ["ledger"],
  tickets: ["ledger", "coverage", "mail", "evidence"],
  rma: ["ledger", "coverage", "mail", "evidence", "tickets"],
  dock: ["ledger", "coverage", "mail", "evidence", "tickets", "rma"],
  suppliers: ["ledger", "coverage", "mail", "evidence", "tickets", "rma", "dock"],
  reliability: ["ledger", "coverage", "rma", "dock"],
};

const forbidden = [
  {
    name: "no-cycles",
    severity: "error",
    from: {},
    to: { circular: true, viaOnly: { dependencyTypesNot: ["type-only"] } },
  },
  {
    name: "nothing-imports-app",
    severity: "error",
    from: { pathNot: "^(app|tests)/" },
    to: { path: "^app/" },
  },
  { name: "nothing-imports-tests", severity: "error", from: { pathNot: "^tests/" }, to: { path: "^tests/" } },
  {
    name: "base-is-pure",
    severity: "error",
    from: { path: "^lib/base/" },
    to: { path: "^(app|components|db|emails|lib/(?!base/))" },
  },
  {
    name: "base-has-no-node",
    severity: "error",
    from: { path: "^lib/base/" },
    to: { dependencyTypes: ["core"] },
  },
  {
    name: "pages-do-not-write",
    severity: "error",
    from: { path: "^app/", pathNot: "(actions\\.ts|route\\.tsx?|^app/_edge/)$|^app/_edge/" },
    to: { path: "(commands\\.ts|\\.io\\.tsx?)$|^db/|node_modules/(drizzle-orm|pg|graphile-worker)/" },
  },
  {
    name: "doors-of-app-have-no-io",
    severity: "error",
    from: { path: "^app/", pathNot: "^app/_edge/" },
    to: { path: "\\.io\\.tsx?$|^db/|node_modules/(drizzle-orm|pg|graphile-worker)/" },
  },
  {
    name: "ui-knows-no-domain-word",
    severity: "error",
    from: { path: "^components/ui/" },
    to: { path: "^(app|db|emails|lib/(?!base/)|components/(?!ui/))" },
  },
  {
    name: "components-and-emails-are-pure",
    severity: "error",
    from: { path: "^(components/(?!ui/)|emails/)" },
    to: {
      path: "^(app|db)/|(queries|commands)\\.ts$|\\.io\\.tsx?$|^lib/(env|log|ctx)\\.ts$",
      dependencyTypesNot: ["type-only"],
    },
  },
  {
    name: "db-knows-no-module",
    severity: "error",
    from: { path: "^db/(client|migrate|schema)" },
    to: {
      path: "^(app|components|emails)/|^lib/(?!base/|env\\.ts|log\\.ts|ctx\\.ts|[a-z]+/schema\\.ts)",
    },
  },
  {
    name: "standins-stand-alone",
    severity: "error",
    from: { path: "^lib/standins/" },
    to: { path: "^(app|components|db|emails|lib/(?!standins/))" },
  },
  {
    name: "shared-knows-no-domain",
    severity: "error",
    from: { path: `^lib/(${SHARED.join("|")})/`, pathNot: "^lib/jobs/(handlers/|worker\\.io\\.ts)" },
    to: { path: `^lib/(${DOMAIN.join("|")})/` },
  },
  {
    name: "audit-jobs-files-do-not-meet",
    severity: "error",
    from: { path: "^lib/(audit)/" },
    to: { path: "^lib/(jobs|files)/" },
  },
  {
    name: "schema-and-rules-are-pure",
    severity: "error",
    from: { path: `^lib/[a-z]+${PURE}` },
    to: {
      path: "(queries|commands)\\.ts$|\\.io\\.tsx?$|^db/|^lib/(env|log)\\.ts$|node_modules/(drizzle-orm|pg|graphile-worker|next)/",
      dependencyTypesNot: ["type-only"],
    },
  },
  ...DOMAIN.map((from) => ({
    name: `${from}-keeps-its-place`,
    severity: "error",
    from: { path: `^lib/${from}/` },
    to: { path: `^lib/(${DOMAIN.filter((to) => to !== from && !MAY[from].includes(to)).join("|")})/` },
  })),
  {
    name: "io-stays-in-its-folder",
    severity: "error",
    from: { path: "^lib/([a-z]+)/", pathNot: "^lib/jobs/(handlers/|worker\\.io\\.ts)" },
    to: { path: "^lib/[a-z]+/.*\\.io\\.tsx?$", pathNot: "^lib/$1/" },
  },
];

module.exports = {
  forbidden,
  options: {
    doNotFollow: { path: "node_modules" },
    exclude: { path: "\\.next|\\.data" },
    tsConfig: { fileName: "tsconfig.json" },
    tsPreCompilationDeps: true,
    enhancedResolveOptions: {
      exportsFields: ["exports"],
      conditionNames: ["import", "node", "default", "types"],
    },
  },
};
