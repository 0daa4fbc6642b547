import { stopRanking } from "@/lib/cases/ranking/ranking";
import type { Context } from "@/lib/context";
import { environment } from "@/lib/env";
import { ensureScorerInUse } from "@/lib/learning/install";
import { newId } from "@/lib/new-id";
import { ensureFirstPolicy } from "@/lib/policy/install";
import { createDatabase } from "../client";
import { liveMonth } from "./month";
import { DEMO_DAYS } from "./scenario";
import { enterTeam } from "./team";

const DAY_MS = 86_400_000;
const SEED = 20_260_117;

/** Makes the demo in an empty database: a month of an invented institution's payments and its team's work on them. */
const { db, close } = createDatabase(environment().DATABASE_URL, 4);
try {
  const now = new Date();
  const lastDay = new Date(Math.floor(now.getTime() / DAY_MS) * DAY_MS);
  const start = new Date(lastDay.getTime() - (DEMO_DAYS - 1) * DAY_MS - DAY_MS / 2);
  const ctx: Context = {
    actor: { kind: "system", job: "demo" },
    db,
    now: () => start,
    requestId: newId(),
    idempotency: null,
  };
  await ensureFirstPolicy(ctx);
  await ensureScorerInUse(ctx);
  const team = await enterTeam(ctx);
  const counts = await liveMonth(ctx, team, SEED, lastDay, now);
  console.log(
    `Demo data: ${counts.payments} payments, ${counts.decided} decisions, ${counts.waiting} cases waiting, over ${DEMO_DAYS} days.`,
  );
} finally {
  stopRanking(db);
  await close();
}
