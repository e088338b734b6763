import { join } from "node:path";
import { plainWords } from "./plain";
import { realServices } from "./settings";
import { forgetData, ROOT, startAll, type System } from "./system";

/** `npm start`, `npm run dev` (--dev) and `npm run demo:reset` (--reset). */
const flags = new Set(process.argv.slice(2));
const say = (line: string) => console.log(line);
const dataDir = process.env.MENDBAY_DATA ?? join(ROOT, ".data");

function onlyTexts(env: NodeJS.ProcessEnv): Record<string, string> {
  return Object.fromEntries(Object.entries(env).filter((e): e is [string, string] => e[1] !== undefined));
}

function tell(system: System, real: boolean): void {
  say(`\nMendbay is ready: ${system.url}\n`);
  if (!real) {
    say(`  Enter as anybody   ${system.url}/door   customer, agent, warehouse, manager or admin`);
    say(`  Mail host          ${system.mailUrl}   what we send; answer or write as any customer`);
    say(`  Upload host        ${system.uploadUrl}/health`);
  }
  say(`  Mail receiver      ${system.receiver.host}:${system.receiver.port}   SMTP`);
  say(`  Data and logs      ${dataDir}`);
  say("\nCtrl-C stops everything; what you entered is kept. `npm run demo:reset` begins anew.");
}

async function main(): Promise<number> {
  const real = realServices(process.env);
  if (flags.has("--reset")) {
    if (real) {
      say("Real services are set: nothing there is removed from here.");
      return 1;
    }
    await forgetData(dataDir);
    say("The old data is gone.");
  }
  let interrupted: (signal: string) => void = () => undefined;
  const signal = new Promise<string>((done) => (interrupted = done));
  // npm passes the signal on as well: the second one is the same Ctrl-C.
  for (const name of ["SIGINT", "SIGTERM", "SIGHUP"] as const) process.on(name, () => interrupted(name));

  const starting = startAll({
    dataDir,
    dev: flags.has("--dev"),
    demo: !flags.has("--no-demo"),
    webPort: process.env.PORT ? Number(process.env.PORT) : undefined,
    real: real ? onlyTexts(process.env) : undefined,
    say,
  });
  const early = await Promise.race([starting.then(() => undefined), signal]);
  if (early) say("\nStopping as soon as what has begun is in order …");
  const system = await starting;
  if (!early) tell(system, real);
  const why = early ?? (await Promise.race([signal, system.broken.then((words) => `!${words}`)]));
  if (why.startsWith("!")) say(`\n${why.slice(1)}`);
  say("\nStopping …");
  await system.stop();
  say("Stopped.");
  return why.startsWith("!") ? 1 : 0;
}

main().then(
  (code) => process.exit(code),
  (thrown: unknown) => {
    console.error(plainWords(thrown) ?? thrown);
    process.exit(1);
  },
);
