import "server-only";
import { and, asc, eq } from "drizzle-orm";
import { alias } from "drizzle-orm/mysql-core";
import type { z } from "zod";
import type { Executor } from "@/db/client";
import { caseNotes, cases, decisions, noteDrafts } from "@/db/schema/cases";
import { people } from "@/db/schema/people";
import { transactions } from "@/db/schema/transactions";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { probabilityOf } from "../decibans";
import { forbidden, notFound } from "../errors";
import { formatAmount } from "../money";
import { type PolicyInForce, policyInForce } from "../policy/read";
import { readBaseCurrency } from "../transactions/base-currency";
import { UNDECIDED_STATES } from "./codes";
import { rankingOf } from "./ranking/ranking";
import { readEvidenceNow, readEvidenceShown } from "./read-evidence";
import { readLinks } from "./read-links";
import { readTimeline } from "./read-timeline";
import { holderOf } from "./rules";
import type { CaseView, DecisionView, EvidenceView } from "./schema";
import { maySee, readerOf } from "./visibility";

const assignee = alias(people, "assignee");
const claimer = alias(people, "claimer");

/** All that the case page shows. @throws KnownError not_found, forbidden */
export async function caseView(ctx: Context, input: { id: string }): Promise<CaseView> {
  demand(ctx, "cases.read");
  const { id: caseId } = input;
  const { db } = ctx;
  const now = ctx.now();
  const found = await readRowOrThrow(db, caseId);
  const { row, transaction } = found;
  const verdicts = await readDecisions(db, caseId);
  const reader = readerOf(ctx.actor);
  const decidedIt = verdicts.some(({ decision }) => decision.personId === reader.personId);
  if (!maySee(row, reader) && !decidedIt) throw forbidden("This case is not yours");
  const policy = await policyInForce(db, now);
  const holder = holderOf(row, now);
  const isMine = holder !== null && holder === reader.personId;
  return {
    caseId: row.id,
    number: row.number,
    kind: row.kind,
    state: row.state,
    zone: row.zone,
    revision: row.revision,
    openedAt: row.openedAt.toISOString(),
    dueAt: row.dueAt.toISOString(),
    waitUntil: instant(row.waitUntil),
    assignedTo: personRef(row.assignedTo, found.assignedName),
    claimedBy: personRef(row.claimedBy, found.claimedName),
    claimExpiresAt: instant(row.claimExpiresAt),
    mine: isMine,
    transaction: transactionView(transaction, await readBaseCurrency(db)),
    evidence: await readEvidence(ctx, row, verdicts, policy),
    links: await withPresentScores(ctx, await readLinks(db, transaction), policy),
    decisions: verdicts.map(decisionView),
    notes: await readNotes(db, caseId),
    draft: await readDraft(db, caseId, reader.personId),
    timeline: await readTimeline(db, row),
  };
}

type CaseRow = typeof cases.$inferSelect;
type Verdict = Awaited<ReturnType<typeof readDecisions>>[number];

async function readRowOrThrow(db: Executor, caseId: string) {
  const [found] = await db
    .select({ row: cases, transaction: transactions, assignedName: assignee.name, claimedName: claimer.name })
    .from(cases)
    .innerJoin(transactions, eq(transactions.id, cases.transactionId))
    .leftJoin(assignee, eq(assignee.id, cases.assignedTo))
    .leftJoin(claimer, eq(claimer.id, cases.claimedBy))
    .where(eq(cases.id, caseId));
  if (!found) throw notFound("The case");
  return found;
}

async function readDecisions(db: Executor, caseId: string) {
  return db
    .select({ decision: decisions, name: people.name })
    .from(decisions)
    .innerJoin(people, eq(people.id, decisions.personId))
    .where(eq(decisions.caseId, caseId))
    .orderBy(asc(decisions.decidedAt), asc(decisions.id));
}

/** While the case waits, the evidence of now, unless the policy hides it; behind a verdict, what was shown with it. */
async function readEvidence(
  ctx: Context,
  row: CaseRow,
  verdicts: readonly Verdict[],
  policy: PolicyInForce,
): Promise<EvidenceView | null> {
  const isUndecided = UNDECIDED_STATES.some((undecided) => undecided === row.state);
  if (isUndecided && policy.terms.hideScoreUntilVerdict) return null;
  const standing = verdicts.find(({ decision }) => stands(decision))?.decision;
  return standing
    ? readEvidenceShown(ctx.db, standing)
    : readEvidenceNow(ctx.db, row.scoreId, policy, ctx.now());
}

/** A linked case that waits has the probability it has in the queue, unless the policy hides it. */
async function withPresentScores(
  ctx: Context,
  links: CaseView["links"],
  { terms }: PolicyInForce,
): Promise<CaseView["links"]> {
  if (terms.hideScoreUntilVerdict) {
    return links.map((link) => (link.verdict === null ? { ...link, probability: null } : link));
  }
  if (!links.some(({ caseId }) => caseId !== null)) return links;
  return rankingOf(ctx.db).read(ctx.now(), (view) =>
    links.map((link) => {
      const logit = link.caseId === null ? undefined : view.logitOf(link.caseId);
      return logit === undefined ? link : { ...link, probability: probabilityOf(logit) };
    }),
  );
}

async function readNotes(db: Executor, caseId: string): Promise<CaseView["notes"]> {
  const rows = await db
    .select({ id: people.id, name: people.name, writtenAt: caseNotes.writtenAt, body: caseNotes.body })
    .from(caseNotes)
    .innerJoin(people, eq(people.id, caseNotes.personId))
    .where(eq(caseNotes.caseId, caseId))
    .orderBy(asc(caseNotes.writtenAt), asc(caseNotes.id));
  return rows.map(({ id, name, writtenAt, body }) => ({
    by: { id, name },
    writtenAt: writtenAt.toISOString(),
    body,
  }));
}

async function readDraft(db: Executor, caseId: string, personId: string | null): Promise<string> {
  if (personId === null) return "";
  const [draft] = await db
    .select({ body: noteDrafts.body })
    .from(noteDrafts)
    .where(and(eq(noteDrafts.caseId, caseId), eq(noteDrafts.personId, personId)));
  return draft?.body ?? "";
}

const stands = (decision: { undoneAt: Date | null; supersededAt: Date | null }) =>
  decision.undoneAt === null && decision.supersededAt === null;

const instant = (date: Date | null) => date?.toISOString() ?? null;

const personRef = (id: string | null, name: string | null) => (id && name ? { id, name } : null);

export function decisionView({ decision, name }: Verdict): z.infer<typeof DecisionView> {
  const { id, kind, personId, verdict, typology, confidence, reason } = decision;
  return {
    decisionId: id,
    kind,
    by: { id: personId, name },
    verdict,
    typology,
    confidence,
    reason,
    decidedAt: decision.decidedAt.toISOString(),
    undoUntil: decision.undoUntil.toISOString(),
    undoneAt: instant(decision.undoneAt),
    stands: stands(decision),
  };
}

function transactionView(
  row: typeof transactions.$inferSelect,
  baseCurrency: string,
): CaseView["transaction"] {
  const { id, seq, contentHash, amountMinor, amountBaseMinor, action, label, remote, ...same } = row;
  return {
    ...same,
    transactionId: id,
    occurredAt: row.occurredAt.toISOString(),
    receivedAt: row.receivedAt.toISOString(),
    amount: formatAmount(amountMinor, row.currency),
    amountBase: amountBaseMinor === null ? null : formatAmount(amountBaseMinor, baseCurrency),
    baseCurrency,
    remote: remote === null ? null : remote === 1,
    accountOpenedAt: instant(row.accountOpenedAt),
    ruleHits: row.ruleHits ?? [],
    attributes: row.attributes ?? {},
    holdExpiresAt: instant(row.holdExpiresAt),
  };
}
