import { currentCtx } from "@/app/_edge/ctx";
import { may } from "@/lib/auth/rules";
import { travelerPdf } from "@/lib/rma/papers.queries";

const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

/** The traveler, drawn from the data when it is asked for. */
export async function GET(_request: Request, at: { params: Promise<{ id: string }> }): Promise<Response> {
  const { id } = await at.params;
  const ctx = await currentCtx();
  const paper = UUID.test(id) && may(ctx, "rma.read") ? await travelerPdf(ctx, id) : null;
  if (!paper)
    return new Response("Not found.", {
      status: 404,
      headers: { "content-type": "text/plain; charset=utf-8" },
    });
  return new Response(new Uint8Array(paper.pdf), {
    headers: {
      "content-type": "application/pdf",
      "content-disposition": `inline; filename="traveler-${paper.number}.pdf"`,
      "cache-control": "private, no-store",
      "x-content-type-options": "nosniff",
    },
  });
}
