import "server-only";
import { asc, eq, inArray } from "drizzle-orm";
import type { z } from "zod";
import type { Executor } from "@/db/client";
import { people } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import type { TimelineEntry } from "./schema";
import { detailOf, type Facts } from "./timeline";

/** A case that was worked on more often than this shows where it began; all of it is in the trail. */
const MOST_ENTRIES = 200;
const OURSELVES = "Cupel";

type Timed = { id: string; kind: string; zone: string; state: string; openedAt: Date; changedAt: Date };

/**
 * What the trail holds about a case, oldest first, between how it began and how it ended by itself: cases are opened
 * and lapse by the batch, with one entry for all of them.
 */
export async function readTimeline(db: Executor, row: Timed): Promise<z.infer<typeof TimelineEntry>[]> {
  const entries = await db
    .select({
      at: trail.at,
      act: trail.act,
      actorId: trail.actorId,
      onBehalfOf: trail.onBehalfOf,
      facts: trail.facts,
    })
    .from(trail)
    .where(eq(trail.caseId, row.id))
    .orderBy(asc(trail.seq))
    .limit(MOST_ENTRIES);
  const parsed = entries.map((entry) => ({ ...entry, facts: JSON.parse(entry.facts) as Facts }));
  const names = await namesOf(db, parsed.flatMap(peopleIn));
  const nameOf = (personId: unknown) => names.get(String(personId)) ?? null;
  return [
    {
      at: row.openedAt.toISOString(),
      act: "case.opened",
      by: OURSELVES,
      detail: `${row.kind}, zone ${row.zone}`,
    },
    ...parsed.map(({ at, act, actorId, onBehalfOf, facts }) => ({
      at: at.toISOString(),
      act,
      by: nameOf(onBehalfOf ?? actorId) ?? OURSELVES,
      detail: detailOf(act, facts, nameOf),
    })),
    ...(row.state === "lapsed"
      ? [{ at: row.changedAt.toISOString(), act: "case.lapsed", by: OURSELVES, detail: null }]
      : []),
  ];
}

function peopleIn({
  actorId,
  onBehalfOf,
  facts,
}: {
  actorId: string;
  onBehalfOf: string | null;
  facts: Facts;
}) {
  const { to, assignedFrom, claimEndedOf, claimOf, lapsedClaimOf } = facts;
  const named = [actorId, onBehalfOf, to, assignedFrom, claimEndedOf, claimOf, lapsedClaimOf];
  return named.flatMap((id) => (typeof id === "string" && UUID.test(id) ? id : []));
}

const UUID = /^[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}$/;

async function namesOf(db: Executor, personIds: readonly string[]): Promise<Map<string, string>> {
  const ids = [...new Set(personIds)];
  if (ids.length === 0) return new Map();
  const rows = await db
    .select({ id: people.id, name: people.name })
    .from(people)
    .where(inArray(people.id, ids));
  return new Map(rows.map(({ id, name }) => [id, name]));
}
