import { currentCtx } from "@/app/_edge/ctx";
import { openFile } from "@/lib/files/queries";

const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

/**
 * A checked file for who may see it. Only pictures that we drew ourselves are shown in a page;
 * all else is handed over as a download that can run nothing.
 */
export async function GET(_request: Request, at: { params: Promise<{ id: string }> }): Promise<Response> {
  const { id } = await at.params;
  const found = UUID.test(id) ? await openFile(await currentCtx(), id) : null;
  if (!found)
    return new Response("Not found.", {
      status: 404,
      headers: { "content-type": "text/plain; charset=utf-8" },
    });
  const { file, body } = found;
  const picture = file.type === "image/jpeg";
  const name = encodeURIComponent(picture ? file.name.replace(/\.[^.]*$/, ".jpg") : file.name).replace(
    /['()*]/g,
    (c) => `%${c.charCodeAt(0).toString(16)}`,
  );
  return new Response(body, {
    headers: {
      "content-type": picture
        ? "image/jpeg"
        : file.type === "text/plain"
          ? "text/plain; charset=utf-8"
          : (file.type ?? "application/octet-stream"),
      "content-disposition": `${picture ? "inline" : "attachment"}; filename*=UTF-8''${name}`,
      "cache-control": "private, no-store",
      "x-content-type-options": "nosniff",
      "content-security-policy": "sandbox; default-src 'none'",
      ...(file.size ? { "content-length": String(file.size) } : {}),
    },
  });
}
