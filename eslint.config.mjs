import next from "eslint-config-next/core-web-vitals";
import ts from "eslint-config-next/typescript";

/**
 * A command that opens a transaction must permit and audit. Held by a rule, not by memory:
 * every exported function of a commands.ts that calls transact() must call permit() and audit().
 */
const commandShape = {
  meta: {
    type: "problem",
    schema: [],
    messages: { missing: "{{name}} opens a transaction without {{what}}." },
  },
  create(context) {
    const calls = (node) => {
      const found = new Set();
      const walk = (n) => {
        if (!n || typeof n.type !== "string") return;
        if (n.type === "CallExpression" && n.callee.type === "Identifier") found.add(n.callee.name);
        for (const key of Object.keys(n)) {
          if (key === "parent") continue;
          const child = n[key];
          if (Array.isArray(child)) child.forEach(walk);
          else if (child && typeof child === "object") walk(child);
        }
      };
      walk(node);
      return found;
    };
    const check = (name, body) => {
      const found = calls(body);
      if (!found.has("transact")) return;
      for (const what of ["permit", "audit"]) {
        if (!found.has(what))
          context.report({ node: body, messageId: "missing", data: { name, what: `${what}()` } });
      }
    };
    return {
      FunctionDeclaration: (n) => check(n.id?.name ?? "function", n.body),
      VariableDeclarator: (n) => {
        if (n.init?.type === "ArrowFunctionExpression") check(n.id.name ?? "function", n.init.body);
      },
    };
  },
};

/** Pure files take the clock, ids and randomness as arguments. */
const pure = {
  meta: {
    type: "problem",
    schema: [],
    messages: { impure: "A pure file has no {{what}}: take it as an argument." },
  },
  create(context) {
    const say = (node, what) => context.report({ node, messageId: "impure", data: { what } });
    return {
      AwaitExpression: (n) => say(n, "await"),
      NewExpression(n) {
        if (n.callee.name === "Date" && n.arguments.length === 0) say(n, "new Date()");
      },
      CallExpression(n) {
        if (["fetch", "setTimeout", "setInterval"].includes(n.callee.name)) say(n, n.callee.name);
      },
      MemberExpression(n) {
        const text = `${n.object.name ?? ""}.${n.property.name ?? ""}`;
        if (["Date.now", "Math.random", "process.env", "crypto.randomUUID"].includes(text)) say(n, text);
        if (n.object.name === "console") say(n, "console");
      },
    };
  },
};

const mendbay = { rules: { "command-shape": commandShape, pure } };

const config = [
  { ignores: [".next/**", ".data/**", "node_modules/**", "next-env.d.ts", "test-results/**"] },
  ...next,
  ...ts,
  {
    plugins: { mendbay },
    rules: {
      "@typescript-eslint/no-unused-vars": ["error", { argsIgnorePattern: "^_", varsIgnorePattern: "^_" }],
      "@typescript-eslint/no-explicit-any": "error",
      "no-console": "error",
    },
  },
  { files: ["lib/*/commands.ts", "lib/*/*.commands.ts"], rules: { "mendbay/command-shape": "error" } },
  {
    files: ["lib/base/*.ts", "lib/*/*.ts"],
    ignores: [
      "lib/**/*.io.ts",
      "lib/*/{,*.}commands.ts",
      "lib/*/{,*.}queries.ts",
      "lib/standins/**",
      "lib/jobs/**",
    ],
    rules: { "mendbay/pure": "error" },
  },
  { files: ["lib/standins/**", "db/**", "tests/**"], rules: { "no-console": "off" } },
];

export default config;
