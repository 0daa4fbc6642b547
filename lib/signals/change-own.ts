import "server-only";
import { eq, sql } from "drizzle-orm";
import { ownSignals } from "@/db/schema/learning";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { conflict } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { refuseTakenName } from "./draft-own";
import { lockOwnSignals, ownOrThrow, refuseBadFormula, refuseWhileProposed } from "./own-rows";
import type { ChangeSignalInput, OwnSignalView } from "./own-schema";
import { ownViewOrThrow } from "./read-signals";

/** Changes a draft. Once a signal has been on, scores and labels rest on its formula, and it stays as it is. */
export async function changeSignal(ctx: Context, input: ChangeSignalInput): Promise<OwnSignalView> {
  demandPerson(ctx, "scorer.manage");
  refuseBadFormula(input.formula);
  const { id, revision, ...fields } = input;
  return writeOnce(ctx, async (tx) => {
    const rows = await lockOwnSignals(tx);
    const row = ownOrThrow(rows, id, revision);
    if (row.position !== null)
      throw conflict("This signal has been on, and scores rest on its formula; define another one");
    await refuseWhileProposed(tx, id);
    refuseTakenName(rows, fields.name, id);
    await tx
      .update(ownSignals)
      .set({ ...fields, revision: sql`${ownSignals.revision} + 1`, changedAt: ctx.now() })
      .where(eq(ownSignals.id, id));
    await appendTrail(ctx, tx, {
      act: "signal.changed",
      subjectKind: "signal",
      subjectId: id,
      facts: {
        formula: fields.formula,
        middle: fields.middle,
        reach: fields.reach,
        before: { formula: row.formula, middle: row.middle, reach: row.reach },
      },
    });
    return ownViewOrThrow(tx, id);
  });
}
