import "server-only";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { appendTrail } from "./append";
import type { VerifyInput, VerifyView } from "./schema";
import { verifyTrail } from "./verify";

/** The verification that somebody asked for; that it was done, and how it ended, is an entry as well. */
export async function verifyTrailAsked(ctx: Context, input: VerifyInput): Promise<VerifyView> {
  demand(ctx, "trail.read");
  const noted =
    input.notedSeq !== undefined && input.notedHash !== undefined
      ? { seq: input.notedSeq, hash: Buffer.from(input.notedHash, "hex") }
      : null;
  const { head, ...check } = await verifyTrail(ctx.db, noted);
  const view = { ...check, headSeq: head.seq, headHash: head.hash.toString("hex") };
  await inTransaction(ctx.db, (tx) =>
    appendTrail(ctx, tx, { act: "trail.verified", subjectKind: "trail", subjectId: "chain", facts: view }),
  );
  return view;
}
