import "server-only";
import type { Tx } from "@/db/client";
import { isDuplicate } from "@/db/errors";
import { approvals } from "@/db/schema/approvals";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { conflict, forbidden } from "../errors";
import { newId } from "../new-id";
import { appendTrail } from "../trail/append";
import type { ApprovalKind, ApprovalSubject } from "./codes";
import { approvalOrThrow } from "./read";
import type { ApprovalView } from "./schema";

/**
 * Puts something before a second person, at the end of the caller's transaction; nothing is done until they approve.
 * @throws KnownError conflict while the same thing waits already
 */
export async function propose(
  ctx: Context,
  tx: Tx,
  wish: { kind: ApprovalKind; subject: ApprovalSubject; reason: string },
): Promise<ApprovalView> {
  const person = demandPerson(ctx, "scorer.manage");
  if ("personId" in wish.subject && wish.subject.personId === person.personId)
    throw forbidden("These labels are yours; somebody else has to propose their removal");
  const id = newId();
  try {
    await tx
      .insert(approvals)
      .values({ id, ...wish, state: "waiting", proposedBy: person.personId, proposedAt: ctx.now() });
  } catch (error) {
    if (isDuplicate(error)) throw conflict("This has been proposed already and waits for a second person");
    throw error;
  }
  await appendTrail(ctx, tx, {
    act: "approval.proposed",
    subjectKind: "approval",
    subjectId: id,
    facts: { kind: wish.kind, ...wish.subject },
  });
  return approvalOrThrow(tx, id);
}
