import { mkdirSync, rmSync } from "node:fs";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { ensureBuilt } from "./build";
import { runOnce, startChild, type Child, type Probe } from "./child";
import { Plain } from "./plain";
import { takePort } from "./ports";
import { databaseMark, dropDatabase, ensureDatabase, markDatabase } from "./databases";
import { endLeftover, isAlive, removeHome, startPostgres, type Cluster } from "./postgres";
import { clusterHome, keptSettings, prepareFolder, takeFolder } from "./settings";
import { uploadToken } from "./uploadhost";

/** The whole of Mendbay as processes on this machine: for `npm start` and the browser tests alike. */
export type System = {
  url: string;
  /** Empty with real services. */
  mailUrl: string;
  uploadUrl: string;
  databaseUrl: string;
  receiver: { host: string; port: number };
  env: Record<string, string>;
  child(name: Part): Child;
  /** For fault experiments: the server's process, which changes when it was killed. */
  databasePid(): number | undefined;
  /** Resolves with words when something keeps ending by itself. */
  broken: Promise<string>;
  stop(): Promise<void>;
};
export type Part = "web" | "worker" | "receiver" | "mailhost" | "uploadhost";

export type StartOptions = {
  dataDir: string;
  clusterHome?: string;
  /** Serve the sources instead of a build. */
  dev?: boolean;
  /** Make the demo when the database is new. */
  demo?: boolean;
  /** Tests: any free ports, durability given up, a slow upload host. */
  throwaway?: boolean;
  chunkDelayMs?: number;
  /** The web port a person asked for; must be free. */
  webPort?: number;
  /** Settings of real services: then nothing here stands in for them. */
  real?: Record<string, string>;
  say?: (line: string) => void;
};

export const ROOT = fileURLToPath(new URL("../..", import.meta.url)).replace(/\/$/, "");
const USUAL = { web: 3000, mailPage: 3025, sink: 2525, receiver: 2526, upload: 4010 };
const DEMO_MADE = "mendbay: demo made";
const NO_DEMO = "mendbay: without demo";

const runTs = (file: string) => ["--import", "tsx", join(ROOT, file)];

export async function startAll(options: StartOptions): Promise<System> {
  const say = options.say ?? (() => undefined);
  const { dataDir } = options;
  const log = (name: string) => join(dataDir, "log", `${name}.log`);
  prepareFolder(dataDir);
  takeFolder(dataDir);
  const settings = keptSettings(dataDir);
  const ports = await choosePorts(options);

  const children = new Map<Part, Child>();
  let cluster: Cluster | undefined;
  let tell: (words: string) => void = () => undefined;
  const broken = new Promise<string>((done) => (tell = done));
  let stopped: Promise<void> | undefined;
  let reviving: Promise<void> | undefined;
  const database = async () => {
    // One that is just coming back is waited for: it would stay behind otherwise.
    if (cluster && !isAlive(cluster.pid)) await reviving?.catch(() => undefined);
    return cluster;
  };
  const stop = () => (stopped ??= stopAll([...children.values()], database, dataDir));

  // Never rejects unseen: it is awaited below, after the database is up.
  const build = options.dev ? undefined : settle(ensureBuilt(ROOT, log("build"), say));

  try {
    let databaseUrl = options.real?.DATABASE_URL ?? "";
    if (!options.real) {
      say("Starting PostgreSQL …");
      const home = options.clusterHome ?? clusterHome(dataDir);
      const open = (port?: number) => startPostgres({ home, port, throwaway: options.throwaway, say });
      cluster = await open();
      databaseUrl = cluster.url();
      // A database that was killed comes back at the same address; the others find it again.
      const keep = (current: Cluster): void => {
        reviving = current.gone.then(async () => {
          if (stopped) return;
          cluster = await open(current.port);
          if (cluster.port !== current.port) throw new Error("another program took its port");
          keep(cluster);
        });
        reviving.catch((thrown: unknown) =>
          tell(`PostgreSQL has ended and does not come back: ${String(thrown)}`),
        );
      };
      keep(cluster);
    }
    const env = environment(options, settings, ports, databaseUrl);
    const start = (name: Part, args: string[], probe: Probe): Child => {
      const child = startChild({ name, args, env, cwd: ROOT, logFile: log(name), probe, failed: tell });
      children.set(name, child);
      return child;
    };

    const fresh = cluster ? await prepareDatabase(cluster, options) : false;
    await runOnce({
      name: "The migration",
      args: runTs("db/migrate.ts"),
      env,
      cwd: ROOT,
      logFile: log("migrate"),
      say,
    });
    if (!options.real) {
      mkdirSync(env.MAILHOST_DIR!, { recursive: true });
      const hosts = [
        start("uploadhost", runTs("lib/standins/uploadhost.ts"), {
          url: `http://127.0.0.1:${ports.upload}/health`,
        }),
        start("mailhost", runTs("lib/standins/mailhost.ts"), {
          url: `http://127.0.0.1:${ports.mailPage}/health`,
        }),
      ];
      await Promise.all(hosts.map((host) => host.ready()));
    }
    if (cluster && fresh && options.demo) {
      say("Making the demo: two years of an invented seller. This takes a minute, once …");
      await runOnce({
        name: "The demo",
        args: runTs("db/demo/run.ts"),
        env,
        cwd: ROOT,
        logFile: log("demo"),
        say,
      });
    }
    if (cluster && fresh) await markDatabase(cluster, options.demo ? DEMO_MADE : NO_DEMO);

    const workers = [
      start("receiver", runTs("lib/mail/receiver.io.ts"), "message"),
      start("worker", runTs("lib/jobs/worker.io.ts"), "message"),
    ];
    const built = await build;
    if (built && "thrown" in built) throw built.thrown;
    const next = ["node_modules/next/dist/bin/next", options.dev ? "dev" : "start"];
    const web = start("web", [...next, "-H", "127.0.0.1", "-p", String(ports.web)], {
      url: `http://127.0.0.1:${ports.web}/api/readyz`,
    });
    await Promise.all([...workers, web].map((child) => child.ready()));

    return {
      url: env.MENDBAY_URL!,
      mailUrl: options.real ? "" : `http://127.0.0.1:${ports.mailPage}`,
      uploadUrl: options.real ? "" : `http://localhost:${ports.upload}`,
      databaseUrl,
      receiver: { host: env.RECEIVER_HOST!, port: Number(env.RECEIVER_PORT) },
      env,
      child(name) {
        const found = children.get(name);
        if (!found) throw new Error(`${name} does not run here`);
        return found;
      },
      databasePid: () => cluster?.pid,
      broken,
      stop,
    };
  } catch (thrown) {
    await stop();
    throw thrown;
  }
}

type Ports = Record<keyof typeof USUAL, number>;

async function choosePorts(options: StartOptions): Promise<Ports> {
  const usual = (name: keyof typeof USUAL) => takePort(options.throwaway ? 0 : USUAL[name]);
  const ports: Ports = {
    web: options.webPort ? await takePort(options.webPort) : await usual("web"),
    mailPage: await usual("mailPage"),
    sink: await usual("sink"),
    receiver: await usual("receiver"),
    upload: await usual("upload"),
  };
  if (options.webPort && ports.web !== options.webPort)
    throw new Plain(`Port ${options.webPort} is in use. Free it, or leave PORT unset to take another.`);
  return ports;
}

function environment(
  options: StartOptions,
  settings: ReturnType<typeof keptSettings>,
  ports: Ports,
  databaseUrl: string,
): Record<string, string> {
  const url = options.real?.MENDBAY_URL ?? `http://127.0.0.1:${ports.web}`;
  const secret = options.real?.MENDBAY_SECRET ?? settings.secret;
  const common = {
    NODE_ENV: options.dev ? "development" : "production",
    TSX_TSCONFIG_PATH: join(ROOT, "tsconfig.node.json"),
    NEXT_TELEMETRY_DISABLED: "1",
    DATABASE_URL: databaseUrl,
    MENDBAY_URL: url,
    MENDBAY_SECRET: secret,
    NEXTAUTH_URL: url,
    NEXTAUTH_SECRET: secret,
    UPLOADTHING_IS_DEV: "false",
    UPLOADTHING_LOG_LEVEL: "Warning",
    RECEIVER_HOST: "127.0.0.1",
    RECEIVER_PORT: String(ports.receiver),
  };
  if (options.real) return { ...common, MENDBAY_DEMO: "0", ...options.real };
  const upload = `http://localhost:${ports.upload}`;
  return {
    ...common,
    MENDBAY_DEMO: "1",
    SMTP_URL: `smtp://127.0.0.1:${ports.sink}`,
    MAILHOST_SMTP_PORT: String(ports.sink),
    MAILHOST_HTTP_PORT: String(ports.mailPage),
    MAILHOST_DIR: join(options.dataDir, "mail"),
    UPLOADHOST_DIR: join(options.dataDir, "uploads"),
    UPLOADHOST_CHUNK_DELAY_MS: String(options.chunkDelayMs ?? 0),
    UPLOADTHING_TOKEN: uploadToken({ apiKey: settings.uploadKey, appId: settings.uploadApp }),
    UPLOADTHING_INGEST_URL: upload,
    UPLOADTHING_API_URL: upload,
    // The client library speaks http to a host whose name contains "local".
    UPLOADTHING_UFS_HOST: `localhost:${ports.upload}`,
    UPLOADTHING_UFS_APP_ID_LOCATION: "path",
    UPLOADTHING_CALLBACK_URL: `${url}/api/uploadthing`,
  };
}

/** True when the database is new. One whose demo broke off half-way is made anew. */
async function prepareDatabase(cluster: Cluster, options: StartOptions): Promise<boolean> {
  const made = await ensureDatabase(cluster);
  if (made) return true;
  if (await databaseMark(cluster)) return false;
  await dropDatabase(cluster);
  for (const folder of ["mail", "uploads"])
    rmSync(join(options.dataDir, folder), { recursive: true, force: true });
  return ensureDatabase(cluster);
}

/** Who takes work first, the hosts they use next, the database last. */
async function stopAll(
  children: Child[],
  cluster: () => Promise<Cluster | undefined>,
  dataDir: string,
): Promise<void> {
  const first = children.filter((c) => ["web", "worker", "receiver"].includes(c.name));
  await Promise.all(first.map((child) => child.stop()));
  await Promise.all(children.filter((c) => !first.includes(c)).map((child) => child.stop()));
  await (await cluster())?.stop();
  rmSync(join(dataDir, "running.pid"), { force: true });
}

function settle(work: Promise<void>): Promise<{ thrown: unknown } | undefined> {
  return work.then(
    () => undefined,
    (thrown: unknown) => ({ thrown }),
  );
}

/** Removes everything that was ever entered here; settings and their secrets stay. */
export async function forgetData(dataDir: string): Promise<void> {
  prepareFolder(dataDir, 1);
  takeFolder(dataDir);
  for (const folder of ["mail", "uploads", "log"])
    rmSync(join(dataDir, folder), { recursive: true, force: true });
  await endLeftover(clusterHome(dataDir));
  removeHome(clusterHome(dataDir));
}
