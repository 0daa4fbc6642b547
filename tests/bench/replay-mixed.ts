import { eq, inArray } from "drizzle-orm";
import { createDatabase, type Database } from "@/db/client";
import { Chance } from "@/db/demo/random";
import { scenarioDays } from "@/db/demo/scenario";
import { cases, decisions } from "@/db/schema/cases";
import { people, personRoles } from "@/db/schema/people";
import { UNDECIDED_STATES } from "@/lib/cases/codes";
import { stopRanking } from "@/lib/cases/ranking/ranking";
import type { Context, PersonActor } from "@/lib/context";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import { undoDecision } from "@/lib/decisions/undo";
import { environment } from "@/lib/env";
import { replayLog } from "@/lib/learning/replay";
import { newId } from "@/lib/new-id";
import { verifyTrail } from "@/lib/trail/verify";
import { receiveTransactions } from "@/lib/transactions/receive";
import type { Row } from "../support/bench";
import { setTerms } from "./support/install";

const DECISIONS = 3_000;

/** Three thousand decisions mixed with undos and corrections; then the log is lived again and compared bit for bit. */
export async function run(): Promise<Row[]> {
  const { db, close } = createDatabase(environment().DATABASE_URL, 6);
  try {
    const acts = await work(db);
    const startedMs = performance.now();
    const report = await replayLog(db);
    const seconds = ((performance.now() - startedMs) / 1000).toFixed(1);
    const trail = await verifyTrail(db);
    const { firstDifferingLoss, differingStates, cumulativeLossEqual } = report;
    const same = (ok: boolean) => ({ measured: ok ? "identical" : "DIFFERS", limit: "bit for bit", ok });
    return [
      { name: "acts", measured: acts, limit: "–", ok: true },
      { name: "rows of the log, replayed", measured: `${report.rows} in ${seconds} s`, limit: "–", ok: true },
      { name: "state", ...same(differingStates.length === 0) },
      { name: "losses", ...same(firstDifferingLoss === null && cumulativeLossEqual) },
      { name: "trail", ...same(trail.intact) },
    ];
  } finally {
    stopRanking(db);
    await close();
  }
}

async function work(db: Database): Promise<string> {
  const context = (actor: Context["actor"]): Context => ({
    actor,
    db,
    now: () => new Date(),
    requestId: newId(),
    idempotency: null,
  });
  const system = context({ kind: "system", job: "bench" });
  await setTerms(db, { reviewThreshold: { kind: "fixed", probability: 0 }, holdThreshold: 1 });
  await fill(system);
  const [reviewer, supervisor] = await Promise.all([enter(db, "reviewer"), enter(db, "supervisor")]);
  const chance = new Chance(3);
  const open = await db
    .select({ id: cases.id, revision: cases.revision })
    .from(cases)
    .where(inArray(cases.state, [...UNDECIDED_STATES]))
    .limit(DECISIONS);
  const counts = { decided: 0, undone: 0, corrected: 0 };
  const standing: string[] = [];
  for (const { id, revision } of open) {
    await decideCase(context(reviewer), {
      id,
      ...finding(chance.hits(0.2)),
      confidence: "sure",
      seenVersion: revision,
      scoreWasHidden: false,
      together: [],
    });
    counts.decided += 1;
    if (chance.hits(0.05)) {
      await undoDecision(context(reviewer), { id });
      counts.undone += 1;
      continue;
    }
    standing.push(id);
    if (chance.hits(0.05)) counts.corrected += await correct(context(supervisor), chance.pick(standing));
  }
  return `${counts.decided} decisions, ${counts.undone} undos, ${counts.corrected} corrections`;
}

/** @returns 1, or 0 where the supervisor corrected the case before and may not overturn themselves */
async function correct(ctx: Context, id: string): Promise<number> {
  const [row] = await ctx.db
    .select({ verdict: decisions.verdict, kind: decisions.kind })
    .from(decisions)
    .where(eq(decisions.standsForCaseId, id));
  if (row?.kind !== "decision") return 0;
  await correctDecision(ctx, { id, ...finding(row.verdict !== "fraudulent"), reason: "Found otherwise" });
  return 1;
}

const finding = (fraudulent: boolean) =>
  fraudulent
    ? { verdict: "fraudulent" as const, typology: "other" as const }
    : { verdict: "legitimate" as const, typology: null };

async function fill(ctx: Context): Promise<void> {
  let sent = 0;
  for (const { transactions } of scenarioDays(9, new Date("2026-11-30T00:00:00Z"))) {
    if (sent >= DECISIONS) return;
    await receiveTransactions(ctx, { source: "bench", items: transactions.map(({ item }) => item) });
    sent += transactions.length;
  }
}

async function enter(db: Database, role: "reviewer" | "supervisor"): Promise<PersonActor> {
  const personId = newId();
  const createdAt = new Date();
  await db.insert(people).values({
    id: personId,
    email: `${personId}@bench.example`,
    name: role,
    passwordHash: "never signs in",
    createdAt,
  });
  await db.insert(personRoles).values({ personId, role, grantedAt: createdAt });
  return { kind: "person", personId, name: role, roles: [role], timeZone: "UTC", key: null };
}
