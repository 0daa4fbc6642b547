import "server-only";
import { settings } from "@/db/schema/people";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { EXEMPT_FIELDS_KEY, readExemptFields } from "./intake-settings";
import type { ExemptFieldsView } from "./schema";

/** Lets identifier fields of a source hold what looks like a card number; replaces what was set before. */
export async function setExemptFields(ctx: Context, input: ExemptFieldsView): Promise<ExemptFieldsView> {
  demand(ctx, "keys.manage");
  const changedAt = ctx.now();
  return writeOnce(ctx, async (tx) => {
    const before = await readExemptFields(tx);
    const value = input.exemptIdentifierFields;
    await tx
      .insert(settings)
      .values({ key: EXEMPT_FIELDS_KEY, value, changedAt })
      .onDuplicateKeyUpdate({ set: { value, changedAt } });
    await appendTrail(ctx, tx, {
      act: "intake.exemptions_set",
      subjectKind: "setting",
      subjectId: EXEMPT_FIELDS_KEY,
      facts: { before, after: value },
    });
    return input;
  });
}

export async function listExemptFields(ctx: Context): Promise<ExemptFieldsView> {
  demand(ctx, "intake.read");
  return { exemptIdentifierFields: await readExemptFields(ctx.db) };
}
