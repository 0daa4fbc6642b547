import "server-only";
import { and, asc, desc, eq, gt, inArray, lte } from "drizzle-orm";
import type { Database, Tx } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { people, settings } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import { inTransaction } from "@/db/tx";
import { type AssignedCase, casesAssignedMail } from "@/emails/cases-assigned";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { enqueueMail, type Message } from "../mail/enqueue";
import { appendTrail } from "../trail/append";
import { UNDECIDED_STATES } from "./codes";

/** Up to which entry of the trail people have been told. */
const CURSOR_KEY = "cases.assigned_mail";
const ENTRIES_AT_MOST = 2_000;
const MOST_NAMED = 10;

/**
 * Writes to those whom somebody else has given cases since the last run: one message a person, however many cases,
 * and about each case once. Who has the case in hand already, or lost it again, is not told.
 */
export async function mailAssigned(ctx: Context, { appUrl }: { appUrl: string }): Promise<void> {
  demand(ctx, "case.assign");
  const told = await readCursor(ctx.db);
  if (told === null) return beginCursor(ctx);
  const entries = await readAssignments(ctx.db, told);
  const last = entries.at(-1);
  if (!last) return;
  const news = await newsOf(ctx.db, entries, told);
  const letters = await lettersFor(ctx.db, news, { appUrl, lastSeq: last.seq });
  await inTransaction(ctx.db, async (tx) => {
    // Another server that has told them meanwhile has moved the cursor on.
    if ((await lockCursor(tx)) !== told) return;
    for (const { message } of letters) await enqueueMail(tx, message, { appUrl, now: ctx.now() });
    await tx
      .update(settings)
      .set({ value: last.seq, changedAt: ctx.now() })
      .where(eq(settings.key, CURSOR_KEY));
    const acts = letters.map(({ message, caseIds }) => ({
      act: "person.told_of_cases",
      subjectKind: "person",
      subjectId: message.personId,
      facts: { cases: caseIds },
    }));
    if (acts.length > 0) await appendTrail(ctx, tx, ...acts);
  });
}

async function readCursor(db: Database): Promise<number | null> {
  const [row] = await db.select().from(settings).where(eq(settings.key, CURSOR_KEY));
  return row ? (row.value as number) : null;
}

async function lockCursor(tx: Tx): Promise<number> {
  const [row] = await tx.select().from(settings).where(eq(settings.key, CURSOR_KEY)).for("update");
  return row?.value as number;
}

/** What was assigned before anybody could be told of it stays untold. */
async function beginCursor(ctx: Context): Promise<void> {
  const [newest] = await ctx.db.select({ seq: trail.seq }).from(trail).orderBy(desc(trail.seq)).limit(1);
  const value = newest?.seq ?? 0;
  await ctx.db.insert(settings).ignore().values({ key: CURSOR_KEY, value, changedAt: ctx.now() });
}

type Assignment = { seq: number; caseId: string; to: string; by: string };

async function readAssignments(db: Database, afterSeq: number): Promise<Assignment[]> {
  const rows = await db
    .select()
    .from(trail)
    .where(and(eq(trail.act, "case.assigned"), gt(trail.seq, afterSeq)))
    .orderBy(asc(trail.seq))
    .limit(ENTRIES_AT_MOST);
  return rows.map(assignmentOf);
}

function assignmentOf(row: typeof trail.$inferSelect): Assignment {
  const { to } = JSON.parse(row.facts) as { to: string };
  return { seq: row.seq, caseId: row.subjectId, to, by: row.onBehalfOf ?? row.actorId };
}

/** Which cases each person has not been told of before, by person. */
async function newsOf(
  db: Database,
  entries: readonly Assignment[],
  told: number,
): Promise<Map<string, string[]>> {
  const ids = [...new Set(entries.map(({ caseId }) => caseId))];
  const earlier = await db
    .select()
    .from(trail)
    .where(and(eq(trail.act, "case.assigned"), inArray(trail.caseId, ids), lte(trail.seq, told)));
  const known = new Set(earlier.map(assignmentOf).map(({ caseId, to }) => `${caseId} ${to}`));
  const news = new Map<string, string[]>();
  for (const { caseId, to, by } of entries) {
    if (to === by || known.has(`${caseId} ${to}`)) continue;
    known.add(`${caseId} ${to}`);
    news.set(to, [...(news.get(to) ?? []), caseId]);
  }
  return news;
}

type Letter = { message: Message; caseIds: string[] };

async function lettersFor(
  db: Database,
  news: Map<string, string[]>,
  { appUrl, lastSeq }: { appUrl: string; lastSeq: number },
): Promise<Letter[]> {
  if (news.size === 0) return [];
  const readers = await db
    .select({ id: people.id, email: people.email, timeZone: people.timeZone })
    .from(people)
    .where(and(inArray(people.id, [...news.keys()]), eq(people.state, "active")));
  const letters: Letter[] = [];
  for (const { id, email, timeZone } of readers) {
    const theirs = await stillWaiting(db, id, news.get(id) ?? []);
    if (theirs.length === 0) continue;
    const named = theirs.slice(0, MOST_NAMED);
    const message: Message = {
      ...(await casesAssignedMail({ cases: named, total: theirs.length, timeZone, appUrl })),
      dedupeKey: `assigned:${id}:${lastSeq}`,
      kind: "case_assigned",
      personId: id,
      recipient: email,
    };
    letters.push({ message, caseIds: theirs.map(({ caseId }) => caseId) });
  }
  return letters;
}

/** Those of the cases that are the person's still and that they have not taken in hand yet, the most urgent first. */
async function stillWaiting(db: Database, personId: string, ids: readonly string[]): Promise<AssignedCase[]> {
  const rows = await db
    .select({ caseId: cases.id, number: cases.number, dueAt: cases.dueAt, claimedBy: cases.claimedBy })
    .from(cases)
    .where(
      and(
        inArray(cases.id, [...ids]),
        eq(cases.assignedTo, personId),
        inArray(cases.state, [...UNDECIDED_STATES]),
      ),
    )
    .orderBy(asc(cases.dueAt), asc(cases.number));
  return rows.filter(({ claimedBy }) => claimedBy !== personId);
}
