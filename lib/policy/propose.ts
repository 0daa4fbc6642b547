import "server-only";
import { policies } from "@/db/schema/policies";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { conflict, invalid } from "../errors";
import { newId } from "../new-id";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { termChanges } from "./changes";
import { newestApproved } from "./read";
import { policyRecordOrThrow } from "./records";
import type { PolicyRecord, ProposeInput } from "./schema";

/** Puts new terms, or those of an earlier version again, before a second person. Nothing changes until then. */
export async function proposePolicy(ctx: Context, input: ProposeInput): Promise<PolicyRecord> {
  const person = demandPerson(ctx, "policy.propose");
  return writeOnce(ctx, async (tx) => {
    const base = await newestApproved(tx);
    if (base.version !== input.basedOnVersion)
      throw conflict(
        `Version ${base.version} has been approved meanwhile; compare with it and propose again`,
      );
    const changes = termChanges(base.terms, input.terms);
    if (changes.length === 0)
      throw invalid([{ path: "terms", message: `are the same as those of version ${base.version}` }]);
    const id = newId();
    await tx.insert(policies).values({
      id,
      state: "proposed",
      terms: input.terms,
      basedOnVersion: base.version,
      reason: input.reason,
      proposedBy: person.personId,
      proposedAt: ctx.now(),
    });
    await appendTrail(ctx, tx, {
      act: "policy.proposed",
      subjectKind: "policy",
      subjectId: id,
      facts: { basedOnVersion: base.version, changes },
    });
    return policyRecordOrThrow(tx, id);
  });
}
