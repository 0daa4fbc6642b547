import "server-only";
import { and, asc, eq, inArray } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { isDuplicate } from "@/db/errors";
import { cases } from "@/db/schema/cases";
import { scores, transactions } from "@/db/schema/transactions";
import type { CaseState } from "../cases/codes";
import { openCases } from "../cases/open";
import type { PersonActor } from "../context";
import { conflict, invalid, notFound } from "../errors";
import type { PolicyInForce } from "../policy/read";
import type { Typology, Verdict } from "./codes";
import { refusalToDecide } from "./rules";
import type { DecideInput } from "./schema";

const TOGETHER_WITHIN_MS = 24 * 60 * 60 * 1000;

type Finding = { verdict: Verdict; typology: Typology | null };

/** A locked case with its payment, its current vector and the finding it is to get. */
export type Target = {
  caseRow: typeof cases.$inferSelect;
  transaction: typeof transactions.$inferSelect;
  score: { id: number; vector: Buffer };
  finding: Finding;
};

/**
 * Locks the case and those to be decided with it, in order of their ids, and checks each: all or nothing.
 * Payments of the account that have no case yet get one of kind `sibling`.
 * @returns the case itself first, then the others in the order they were asked for
 */
export async function lockTargets(
  tx: Tx,
  input: DecideInput,
  person: PersonActor,
  policy: PolicyInForce,
  now: Date,
): Promise<Target[]> {
  const wanted = await caseIdsOf(tx, input, policy, now);
  const ids = [...wanted.keys()].sort();
  const rows = await tx
    .select({ caseRow: cases, transaction: transactions, score: { id: scores.id, vector: scores.vector } })
    .from(cases)
    .innerJoin(transactions, eq(transactions.id, cases.transactionId))
    .innerJoin(scores, eq(scores.id, cases.scoreId))
    .where(inArray(cases.id, ids))
    .orderBy(asc(cases.id))
    .for("update");
  const byId = new Map(rows.map((row) => [row.caseRow.id, row]));
  const targets = [...wanted].map(([caseId, finding]) => {
    const row = byId.get(caseId);
    if (!row) throw notFound("The case");
    return { ...row, finding };
  });
  const [main, ...others] = targets;
  if (!main) throw notFound("The case");
  refuseUnlessDecidable(main, person, now);
  refuseUnlessTaken(main, person, policy);
  if (main.caseRow.revision !== input.seenVersion) throw conflict("This case has changed since you saw it");
  for (const [index, other] of others.entries()) {
    refuseUnlessDecidable(other, person, now);
    refuseUnlessTogether(main, other, `together.${index}`);
  }
  return targets;
}

async function caseIdsOf(
  tx: Tx,
  input: DecideInput,
  policy: PolicyInForce,
  now: Date,
): Promise<Map<string, Finding>> {
  const wanted = new Map<string, Finding>([[input.id, { verdict: input.verdict, typology: input.typology }]]);
  const byTransaction = await siblingCases(
    tx,
    input.together.flatMap((item) => item.transactionId ?? []),
    policy,
    now,
  );
  for (const [index, item] of input.together.entries()) {
    const caseId = item.caseId ?? byTransaction.get(item.transactionId ?? "");
    if (!caseId)
      throw invalid([{ path: `together.${index}.transactionId`, message: "is not a known transaction" }]);
    if (wanted.has(caseId)) throw invalid([{ path: `together.${index}`, message: "names a case twice" }]);
    wanted.set(caseId, { verdict: item.verdict, typology: item.typology });
  }
  return wanted;
}

async function siblingCases(
  tx: Tx,
  transactionIds: string[],
  policy: PolicyInForce,
  now: Date,
): Promise<Map<string, string>> {
  const found = new Map<string, string>();
  if (transactionIds.length === 0) return found;
  const rows = await tx
    .select({ transaction: transactions, caseId: cases.id, scoreId: scores.id, zone: scores.zone })
    .from(transactions)
    .innerJoin(scores, and(eq(scores.transactionId, transactions.id), eq(scores.kind, "arrival")))
    .leftJoin(cases, eq(cases.transactionId, transactions.id))
    .where(inArray(transactions.id, transactionIds));
  for (const row of rows) if (row.caseId) found.set(row.transaction.id, row.caseId);
  const without = rows.filter((row) => row.caseId === null);
  const opened = await openOnce(
    tx,
    without.map((row) => ({
      transactionId: row.transaction.id,
      kind: "sibling" as const,
      zone: row.zone,
      scoreId: row.scoreId,
      sampleProbability: null,
      holdExpiresAt: row.transaction.holdExpiresAt,
    })),
    policy,
    now,
  );
  for (const [index, row] of without.entries()) found.set(row.transaction.id, opened[index] as string);
  return found;
}

/** Somebody else may open the same sibling in the same moment; the unique key on the transaction decides. */
const openOnce: typeof openCases = async (...args) => {
  try {
    return await openCases(...args);
  } catch (error) {
    if (isDuplicate(error)) throw conflict("Somebody else is deciding one of these payments");
    throw error;
  }
};

function refuseUnlessDecidable(target: Target, person: PersonActor, now: Date): void {
  const { caseRow } = target;
  const refusal = refusalToDecide({ ...caseRow, state: caseRow.state as CaseState }, person, now);
  if (refusal) throw conflict(`Case ${caseRow.number}: ${refusal}`);
}

/** Where reviewers take what they are served, they cannot decide what they picked themselves. */
function refuseUnlessTaken({ caseRow }: Target, person: PersonActor, { terms }: PolicyInForce): void {
  const free = !terms.takeNextOnly || person.roles.includes("supervisor");
  if (!free && caseRow.claimedBy !== person.personId) {
    throw conflict(`Case ${caseRow.number}: take the next case; the policy does not let reviewers pick`);
  }
}

function refuseUnlessTogether(main: Target, other: Target, path: string): void {
  if (main.transaction.accountId !== other.transaction.accountId) {
    throw invalid([{ path, message: "is of another account" }]);
  }
  const apartMs = Math.abs(main.transaction.occurredAt.getTime() - other.transaction.occurredAt.getTime());
  if (apartMs > TOGETHER_WITHIN_MS) throw invalid([{ path, message: "is more than 24 hours away" }]);
}
