import { createServer } from "node:net";

function tryPort(port: number): Promise<number | undefined> {
  return new Promise((done) => {
    const probe = createServer();
    probe.once("error", () => done(undefined));
    probe.listen({ port, host: "127.0.0.1", exclusive: true }, () => {
      const at = probe.address();
      const found = at && typeof at === "object" ? at.port : undefined;
      probe.close(() => done(found));
    });
  });
}

/** A port on loopback that nobody held a moment ago: `wanted` when it is free, else any. */
export async function takePort(wanted = 0): Promise<number> {
  const found = (wanted ? await tryPort(wanted) : undefined) ?? (await tryPort(0));
  if (!found) throw new Error("No free port on 127.0.0.1.");
  return found;
}
