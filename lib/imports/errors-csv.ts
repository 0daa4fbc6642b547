import "server-only";
import { and, asc, eq, gt } from "drizzle-orm";
import { importErrors } from "@/db/schema/transactions";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { csvLine } from "../csv";
import { readImportOrThrow } from "./read";
import type { ImportInput } from "./schema";

const PAGE_ROWS = 2_000;

/** The row errors as CSV (RFC 4180), streamed, so that a file with a million of them is no burden. */
export async function importErrorsCsv(ctx: Context, { id }: ImportInput): Promise<Response> {
  demand(ctx, "intake.read");
  await readImportOrThrow(ctx.db, id);
  const lines = errorLines(ctx, id);
  const encoder = new TextEncoder();
  const body = new ReadableStream<Uint8Array>({
    async pull(controller) {
      const { done, value } = await lines.next();
      if (done) controller.close();
      else controller.enqueue(encoder.encode(value));
    },
    cancel: async () => {
      await lines.return();
    },
  });
  return new Response(body, {
    headers: {
      "Content-Type": "text/csv; charset=utf-8",
      "Content-Disposition": `attachment; filename="row-errors-${id}.csv"`,
    },
  });
}

async function* errorLines(ctx: Context, id: string): AsyncGenerator<string, void> {
  yield csvLine(["line", "externalId", "field", "message"]);
  for (let after = 0; ; ) {
    const rows = await ctx.db
      .select()
      .from(importErrors)
      .where(and(eq(importErrors.importId, id), gt(importErrors.id, after)))
      .orderBy(asc(importErrors.id))
      .limit(PAGE_ROWS);
    const last = rows.at(-1);
    if (!last) return;
    yield rows.map((row) => csvLine([row.row, row.externalId, row.path, row.message])).join("");
    after = last.id;
  }
}
