import "server-only";
import { and, asc, desc, eq, isNull } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases, decisions } from "@/db/schema/cases";
import { transactions } from "@/db/schema/transactions";

export type StandingDecision = {
  decision: typeof decisions.$inferSelect;
  caseRow: typeof cases.$inferSelect;
  transaction: typeof transactions.$inferSelect;
};

/**
 * Locks the cases of an act in order of their ids and reads what stands on them. An act is one person's at one moment,
 * and that is indexed: a search through all decisions would wait for everybody who is deciding.
 */
export async function lockAct(tx: Tx, act: LastDecision): Promise<StandingDecision[]> {
  const { personId, decidedAt, actId } = act;
  return lockWhere(
    tx,
    and(eq(decisions.personId, personId), eq(decisions.decidedAt, decidedAt), eq(decisions.actId, actId)),
  );
}

/** Locks one decided case and reads what stands on it. */
export async function lockStanding(tx: Tx, caseId: string): Promise<StandingDecision | null> {
  const [row] = await lockWhere(tx, and(eq(cases.id, caseId), eq(decisions.standsForCaseId, caseId)));
  return row ?? null;
}

function lockWhere(tx: Tx, where: ReturnType<typeof and>): Promise<StandingDecision[]> {
  return tx
    .select({ decision: decisions, caseRow: cases, transaction: transactions })
    .from(decisions)
    .innerJoin(cases, eq(cases.id, decisions.caseId))
    .innerJoin(transactions, eq(transactions.id, decisions.transactionId))
    .where(where)
    .orderBy(asc(cases.id))
    .for("update");
}

type LastDecision = Pick<typeof decisions.$inferSelect, "personId" | "decidedAt" | "actId">;

/** The newest decision of a person that has not been taken back. */
export async function findLastDecision(tx: Tx, personId: string): Promise<LastDecision | null> {
  const [row] = await tx
    .select({ personId: decisions.personId, decidedAt: decisions.decidedAt, actId: decisions.actId })
    .from(decisions)
    .where(and(eq(decisions.personId, personId), isNull(decisions.undoneAt)))
    .orderBy(desc(decisions.decidedAt), desc(decisions.id))
    .limit(1);
  return row ?? null;
}
