import "server-only";
import { aliasedTable, asc, desc, eq, type SQL } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { people } from "@/db/schema/people";
import { policies } from "@/db/schema/policies";
import { notFound } from "../errors";
import type { PolicyRecord } from "./schema";

/** @throws KnownError not_found */
export async function policyRecordOrThrow(db: Executor, id: string): Promise<PolicyRecord> {
  const [record] = await listRecords(db, eq(policies.id, id), asc(policies.proposedAt));
  if (!record) throw notFound("The proposal");
  return record;
}

/** Proposals and versions with the names of the people behind them. */
export async function listRecords(
  db: Executor,
  where: SQL,
  order: SQL,
  limit = 1000,
): Promise<PolicyRecord[]> {
  const settler = aliasedTable(people, "settler");
  const rows = await db
    .select({ policy: policies, proposer: people.name, settler: settler.name })
    .from(policies)
    .leftJoin(people, eq(people.id, policies.proposedBy))
    .leftJoin(settler, eq(settler.id, policies.settledBy))
    .where(where)
    .orderBy(order, desc(policies.id))
    .limit(limit);
  return rows.map(({ policy, proposer, settler }) => ({
    policyId: policy.id,
    version: policy.version,
    state: policy.state,
    terms: policy.terms,
    basedOnVersion: policy.basedOnVersion,
    reason: policy.reason,
    proposedBy: personRef(policy.proposedBy, proposer),
    proposedAt: policy.proposedAt.toISOString(),
    settledBy: personRef(policy.settledBy, settler),
    settledAt: policy.settledAt?.toISOString() ?? null,
    refusalReason: policy.refusalReason,
    effectiveAt: policy.effectiveAt?.toISOString() ?? null,
  }));
}

const personRef = (id: string | null, name: string | null) =>
  id !== null && name !== null ? { id, name } : null;
