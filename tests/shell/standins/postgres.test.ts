import { mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import pg from "pg";
import { afterAll, expect, test } from "vitest";
import { databaseMark, ensureDatabase, markDatabase } from "@/lib/standins/databases";
import { endLeftover, removeHome, startPostgres, type Cluster } from "@/lib/standins/postgres";

/* The private cluster: made once, kept, found again after a kill, closed to others. */

const home = mkdtempSync(join(tmpdir(), "mendbay-cluster-"));
let cluster: Cluster | undefined;

afterAll(async () => {
  await cluster?.stop();
  removeHome(home);
});

async function ask(url: string, text: string): Promise<unknown[]> {
  const client = new pg.Client({ connectionString: url });
  client.on("error", () => undefined);
  await client.connect();
  try {
    return (await client.query(text)).rows;
  } finally {
    await client.end();
  }
}

test("a cluster is made on loopback with a password that only its owner reads", async () => {
  cluster = await startPostgres({ home, throwaway: true });
  expect(await ensureDatabase(cluster)).toBe(true);
  expect(await ensureDatabase(cluster)).toBe(false);
  expect(await ask(cluster.url(), "select current_user as who, pg_is_in_recovery() as r")).toEqual([
    { who: "mendbay", r: false },
  ]);
  expect(await ask(cluster.url(), "select rolsuper from pg_roles where rolname = current_user")).toEqual([
    { rolsuper: false },
  ]);
  expect(statSync(join(home, "password")).mode & 0o077).toBe(0);
  const wrong = cluster.url().replace(/:[^:@]+@/, ":guess@");
  await expect(ask(wrong, "select 1")).rejects.toThrow(/password/);
  expect(await ask(cluster.url(), "show listen_addresses")).toEqual([{ listen_addresses: "127.0.0.1" }]);
});

test("data and mark are there after stop and start", async () => {
  await ask(cluster!.url(), "create table kept (n int)");
  await ask(cluster!.url(), "insert into kept values (7)");
  await markDatabase(cluster!, "it's made");
  await cluster!.stop();
  cluster = await startPostgres({ home, throwaway: true });
  expect(await ask(cluster.url(), "select n from kept")).toEqual([{ n: 7 }]);
  expect(await databaseMark(cluster)).toBe("it's made");
});

test("after a kill -9 the next start works and what was committed is there", async () => {
  process.kill(cluster!.pid, "SIGKILL");
  await cluster!.gone;
  cluster = await startPostgres({ home });
  expect(await ask(cluster.url(), "select n from kept")).toEqual([{ n: 7 }]);
});

test("a server left behind is ended by the next start, and its folder is taken over", async () => {
  const left = cluster!;
  cluster = await startPostgres({ home, throwaway: true });
  await left.gone;
  expect(cluster.pid).not.toBe(left.pid);
  expect(await ask(cluster.url(), "select n from kept")).toEqual([{ n: 7 }]);
});

test("a process number that another program took over is left alone", async () => {
  await cluster!.stop();
  const file = join(home, "cluster", "postmaster.pid");
  writeFileSync(file, `${process.pid}\n${home}/cluster\n`);
  await endLeftover(home);
  expect(readFileSync(file, "utf8")).toContain(String(process.pid));
  rmSync(file);
  cluster = undefined;
});
