import "server-only";
import { UTApi, UTFile } from "uploadthing/server";

/**
 * The upload host, through its own SDK. Built when first used and with the fetch of the moment:
 * built early, it would keep the fetch of then.
 */
const host = () =>
  new UTApi({ fetch: (...a: Parameters<typeof fetch>) => globalThis.fetch(...a), logLevel: "Error" });

/** Puts bytes at the upload host, private. Returns their key there. @throws Error when the host refuses. */
export async function putBytes(
  bytes: Uint8Array,
  name: string,
  type: string,
  customId: string,
): Promise<string> {
  const file = new UTFile([bytes as BlobPart], name, { type, customId });
  const done = await host().uploadFiles(file, { acl: "private" });
  if (done.error) throw new Error(`upload host: ${done.error.message}`);
  return done.data.key;
}

/** A short-lived signed address, for our server alone. */
async function signedUrl(key: string): Promise<string> {
  return (await host().generateSignedURL(key, { expiresIn: 60 })).ufsUrl;
}

/** All bytes of a file. @throws Error when the host does not have it. */
export async function getBytes(key: string): Promise<Buffer> {
  const response = await fetch(await signedUrl(key));
  if (!response.ok) throw new Error(`upload host: ${response.status} for a file`);
  return Buffer.from(await response.arrayBuffer());
}

/** Its bytes as a stream, for serving. */
export async function openStream(key: string): Promise<ReadableStream<Uint8Array>> {
  const response = await fetch(await signedUrl(key));
  if (!response.ok || !response.body) throw new Error(`upload host: ${response.status} for a file`);
  return response.body;
}

export async function dropBytes(keys: string[]): Promise<void> {
  if (keys.length > 0) await host().deleteFiles(keys);
}
