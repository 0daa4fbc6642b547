import "server-only";
import { and, asc, desc, eq, like, lt, sql } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { people } from "@/db/schema/people";
import { importErrors, imports } from "@/db/schema/transactions";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { notFound } from "../errors";
import type { ImportDetail, ImportInput, ImportsInput, ImportsView, ImportView } from "./schema";

const FIRST_ERRORS = 200;

export async function listImports(ctx: Context, input: ImportsInput): Promise<ImportsView> {
  demand(ctx, "intake.read");
  const { cursor, limit, state, search } = input;
  const pattern = search ? `%${search.toLowerCase().replace(/[\\%_]/g, "\\$&")}%` : undefined;
  const rows = await importRows(ctx.db)
    .where(
      and(
        // Ids sort by their time of making.
        cursor ? lt(imports.id, cursor) : undefined,
        state && eq(imports.state, state),
        pattern ? like(sql`lower(${imports.fileName})`, pattern) : undefined,
      ),
    )
    .orderBy(desc(imports.id))
    .limit(limit + 1);
  const items = rows.slice(0, limit).map(toView);
  return { items, next: rows.length > limit ? (items.at(-1)?.id ?? null) : null };
}

export async function showImport(ctx: Context, { id }: ImportInput): Promise<ImportDetail> {
  demand(ctx, "intake.read");
  const view = await readImportOrThrow(ctx.db, id);
  const errors = await ctx.db
    .select({
      row: importErrors.row,
      externalId: importErrors.externalId,
      path: importErrors.path,
      message: importErrors.message,
    })
    .from(importErrors)
    .where(eq(importErrors.importId, id))
    .orderBy(asc(importErrors.row), asc(importErrors.id))
    .limit(FIRST_ERRORS);
  return { ...view, errors };
}

export async function readImportOrThrow(db: Executor, id: string): Promise<ImportView> {
  const [row] = await importRows(db).where(eq(imports.id, id));
  if (!row) throw notFound("The import");
  return toView(row);
}

function importRows(db: Executor) {
  return db
    .select({ row: imports, by: people.name })
    .from(imports)
    .leftJoin(people, eq(people.id, imports.personId))
    .$dynamic();
}

function toView({ row, by }: { row: typeof imports.$inferSelect; by: string | null }): ImportView {
  const { id, fileName, source, state, sizeBytes, readBytes, problem } = row;
  const { rowsDone, created, duplicates, rejected, casesOpened } = row;
  return {
    id,
    fileName,
    source,
    state,
    by,
    createdAt: row.createdAt.toISOString(),
    finishedAt: row.finishedAt?.toISOString() ?? null,
    sizeBytes,
    readBytes,
    rowsDone,
    created,
    duplicates,
    rejected,
    casesOpened,
    problem,
  };
}
