import "server-only";
import { eq } from "drizzle-orm";
import { apiKeys } from "@/db/schema/people";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { notFound } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { readKeyOrThrow } from "./read";
import type { KeyInput, KeyView } from "./schema";

export async function revokeKey(ctx: Context, { id }: KeyInput): Promise<KeyView> {
  demand(ctx, "keys.manage");
  return writeOnce(ctx, async (tx) => {
    const [key] = await tx.select().from(apiKeys).where(eq(apiKeys.id, id)).for("update");
    if (!key) throw notFound("This key");
    if (key.revokedAt) return readKeyOrThrow(tx, id);
    await tx.update(apiKeys).set({ revokedAt: ctx.now() }).where(eq(apiKeys.id, id));
    const view = await readKeyOrThrow(tx, id);
    await appendTrail(ctx, tx, { act: "key.revoked", subjectKind: "key", subjectId: id, facts: {} });
    return view;
  });
}
