import { createHash } from "node:crypto";
import type { Database } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { Chance } from "@/db/demo/random";
import { cases } from "@/db/schema/cases";
import { people, personRoles } from "@/db/schema/people";
import { scores, transactions } from "@/db/schema/transactions";
import type { Role } from "@/lib/auth/codes";
import type { Actor, Context, PersonActor } from "@/lib/context";
import { ensureScorerInUse } from "@/lib/learning/install";
import { newId } from "@/lib/new-id";
import { ensureFirstPolicy } from "@/lib/policy/install";
import { DIMENSION } from "@/lib/signals/catalogue";
import { type TestDatabase, testDatabase } from "./database";

/** A moment all worlds start at; tests move on from it. */
export const WORLD_START = new Date("2026-03-02T09:00:00.000Z");

export type WaitingCase = { caseId: string; transactionId: string; scoreId: number; vector: Float64Array };

/** An installation with a policy, an untrained scorer and people, on a schema of its own. */
export type World = TestDatabase & {
  person: (...roles: Role[]) => Promise<PersonActor>;
  ctx: (actor: Actor, at?: Date) => Context;
  waitingCases: (count: number, options?: CaseOptions) => Promise<WaitingCase[]>;
};

type CaseOptions = {
  accountId?: string;
  amountMinor?: number;
  seed?: number;
  openedAt?: Date;
  held?: boolean;
};

export async function testWorld(): Promise<World> {
  const database = await testDatabase();
  const { db } = database;
  const ctx = (actor: Actor, at = WORLD_START): Context => ({
    actor,
    db,
    now: () => at,
    requestId: newId(),
    idempotency: null,
  });
  const system = ctx({ kind: "system", job: "test" });
  await ensureFirstPolicy(system);
  await ensureScorerInUse(system);
  return {
    ...database,
    ctx,
    person: (...roles) => insertPerson(db, roles),
    waitingCases: (count, options) => insertWaitingCases(db, count, options),
  };
}

async function insertPerson(db: Database, roles: Role[]): Promise<PersonActor> {
  const personId = newId();
  const name = `Person ${personId.slice(-6)}`;
  await db.insert(people).values({
    id: personId,
    email: `${personId}@example.test`,
    name,
    passwordHash: "no password: these people never sign in",
    createdAt: WORLD_START,
  });
  if (roles.length > 0) {
    await db.insert(personRoles).values(roles.map((role) => ({ personId, role, grantedAt: WORLD_START })));
  }
  return { kind: "person", personId, name, roles, timeZone: "UTC", key: null };
}

async function insertWaitingCases(
  db: Database,
  count: number,
  options: CaseOptions = {},
): Promise<WaitingCase[]> {
  const { accountId, amountMinor = 12_900, seed = 1, openedAt = WORLD_START, held = false } = options;
  const chance = new Chance(seed);
  const made = Array.from({ length: count }, (_, index) => ({
    caseId: newId(),
    transactionId: newId(),
    vector: randomVector(chance),
    accountId: accountId ?? `ACC-${seed}-${index}`,
  }));
  for (let from = 0; from < count; from += 500) {
    const part = made.slice(from, from + 500);
    await db.insert(transactions).values(
      part.map(({ transactionId, accountId }) => ({
        id: transactionId,
        source: "test",
        externalId: transactionId,
        contentHash: createHash("sha256").update(transactionId).digest(),
        receivedAt: openedAt,
        occurredAt: openedAt,
        amountMinor,
        currency: "EUR",
        amountBaseMinor: amountMinor,
        direction: "outgoing" as const,
        channel: "card_remote" as const,
        accountId,
        counterpartyId: `SHOP-${seed}`,
        action: held ? ("hold" as const) : ("review" as const),
        paymentState: held ? ("held" as const) : ("settled" as const),
        holdExpiresAt: held ? new Date(openedAt.getTime() + 86_400_000) : null,
      })),
    );
    await db.insert(scores).values(part.map((one) => arrivalScore(one, openedAt)));
  }
  const scoreRows = await db.select({ id: scores.id, transactionId: scores.transactionId }).from(scores);
  const scoreOf = new Map(scoreRows.map((row) => [row.transactionId, row.id]));
  const waiting = made.map((one) => ({ ...one, scoreId: scoreOf.get(one.transactionId) as number }));
  for (let from = 0; from < count; from += 500) {
    await db.insert(cases).values(
      waiting.slice(from, from + 500).map(({ caseId, transactionId, scoreId }) => ({
        id: caseId,
        transactionId,
        kind: "alert" as const,
        state: "open" as const,
        zone: held ? ("hold" as const) : ("review" as const),
        scoreId,
        policyVersion: 1,
        openedAt,
        dueAt: new Date(openedAt.getTime() + 86_400_000),
        lapsesAt: new Date(openedAt.getTime() + 14 * 86_400_000),
        changedAt: openedAt,
      })),
    );
  }
  return waiting;
}

function arrivalScore(one: { transactionId: string; vector: Float64Array }, takenAt: Date) {
  return {
    transactionId: one.transactionId,
    kind: "arrival" as const,
    takenAt,
    vector: vectorToBytes(one.vector),
    missing: Buffer.alloc(8),
    signalSetVersion: 1,
    scorerVersion: 1,
    policyVersion: 1,
    logit: 0,
    leverage: 1,
    zone: "review" as const,
  };
}

/** In [−1, 1], the bias last and 1, about as sparse as real signals are. */
function randomVector(chance: Chance): Float64Array {
  const vector = Float64Array.from({ length: DIMENSION }, () =>
    chance.hits(0.4) ? 2 * chance.unit() - 1 : 0,
  );
  vector[DIMENSION - 1] = 1;
  return vector;
}
