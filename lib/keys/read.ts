import "server-only";
import { desc, eq, isNull } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { apiKeys, people } from "@/db/schema/people";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { notFound } from "../errors";
import type { KeysView, KeyView } from "./schema";

/** Keys in use first, the newest first. */
export async function listKeys(ctx: Context): Promise<KeysView> {
  demand(ctx, "people.read");
  const rows = await selectKeys(ctx.db).orderBy(desc(isNull(apiKeys.revokedAt)), desc(apiKeys.createdAt));
  return { items: rows.map(viewOf), next: null };
}

/** @throws KnownError not_found */
export async function readKeyOrThrow(db: Executor, id: string): Promise<KeyView> {
  const [row] = await selectKeys(db).where(eq(apiKeys.id, id));
  if (!row) throw notFound("This key");
  return viewOf(row);
}

const selectKeys = (db: Executor) =>
  db
    .select({ key: apiKeys, personName: people.name })
    .from(apiKeys)
    .leftJoin(people, eq(people.id, apiKeys.actsForPersonId));

type Row = { key: typeof apiKeys.$inferSelect; personName: string | null };

function viewOf({ key, personName }: Row): KeyView {
  return {
    id: key.id,
    name: key.name,
    source: key.source,
    scopes: key.scopes,
    actsFor: key.actsForPersonId ? { id: key.actsForPersonId, name: personName ?? "" } : null,
    createdAt: key.createdAt.toISOString(),
    lastUsedAt: key.lastUsedAt?.toISOString() ?? null,
    revokedAt: key.revokedAt?.toISOString() ?? null,
  };
}
