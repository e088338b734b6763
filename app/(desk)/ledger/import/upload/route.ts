import { NextResponse, type NextRequest } from "next/server";
import { currentCtx } from "@/app/_edge/ctx";
import { may } from "@/lib/auth/rules";
import { env } from "@/lib/env";
import { previewImport } from "@/lib/ledger/commands";
import { MAX_BYTES } from "@/lib/ledger/shipments";

const back = (error: string) =>
  NextResponse.redirect(`${env().MENDBAY_URL}/ledger/import?${new URLSearchParams({ error })}`, 303);

/** Takes the file of the import form. Stops reading where it is too large, and says so. */
export async function POST(request: NextRequest): Promise<Response> {
  const ctx = await currentCtx();
  if (!may(ctx, "ledger.import")) return new NextResponse("Not found.", { status: 404 });
  if (request.headers.get("sec-fetch-site") === "cross-site") return new NextResponse(null, { status: 403 });
  if (Number(request.headers.get("content-length") ?? 0) > MAX_BYTES + 4096) return back("large");
  const form = await request.formData().catch(() => null);
  const file = form?.get("file");
  if (!(file instanceof File) || file.name === "") return back("none");
  if (file.size > MAX_BYTES) return back("large");
  const read = await previewImport(ctx, {
    fileName: file.name,
    bytes: new Uint8Array(await file.arrayBuffer()),
  });
  if (!read.ok) return back(read.refusal.message);
  return NextResponse.redirect(
    `${env().MENDBAY_URL}/ledger/import/${read.value.importId}${read.value.again ? "?again=1" : ""}`,
    303,
  );
}
