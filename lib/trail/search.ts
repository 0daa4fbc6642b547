import "server-only";
import { and, desc, eq, gte, like, lt, or, type SQL } from "drizzle-orm";
import { cases } from "@/db/schema/cases";
import { trail } from "@/db/schema/trail";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { invalid } from "../errors";
import { appendTrail } from "./append";
import { entryViews } from "./entry-views";
import type { TrailInput, TrailView } from "./schema";
import { searchFacts, type TrailFilters } from "./search-facts";

/** One search is one entry, however many of its pages are read. */
export async function searchTrail(ctx: Context, input: TrailInput): Promise<TrailView> {
  demand(ctx, "trail.read");
  const { cursor, limit, ...filters } = input;
  const caseId = await caseIdOf(ctx, filters.case);
  // A number that no case has: nothing matches.
  const rows =
    caseId === null
      ? []
      : await ctx.db
          .select()
          .from(trail)
          .where(and(...conditions(filters, caseId), cursor ? lt(trail.seq, seqOf(cursor)) : undefined))
          .orderBy(desc(trail.seq))
          .limit(limit + 1);
  const page = rows.slice(0, limit);
  const last = page.at(-1);
  const items = await entryViews(ctx.db, page);
  if (!cursor) {
    const facts = searchFacts(filters, { act: await knownAct(ctx, filters.act), caseId });
    await inTransaction(ctx.db, (tx) =>
      appendTrail(ctx, tx, { act: "trail.read", subjectKind: "trail", subjectId: "search", facts }),
    );
  }
  return { items, next: rows.length > limit && last ? cursorOf(last.seq) : null };
}

function conditions(filters: TrailFilters, caseId: string | undefined): (SQL | undefined)[] {
  const { act, person, subject, from, to } = filters;
  const [kind = "", ...id] = subject?.split(":") ?? [];
  return [
    act && actIs(act),
    person && or(eq(trail.actorId, person), eq(trail.onBehalfOf, person)),
    caseId && eq(trail.caseId, caseId),
    subject && and(eq(trail.subjectKind, kind), eq(trail.subjectId, id.join(":"))),
    from && gte(trail.at, new Date(from)),
    to && lt(trail.at, new Date(to)),
  ].map((condition) => condition || undefined);
}

/** The act, or family of acts, that was asked for; null where the trail has no such act. */
async function knownAct(ctx: Context, act: string | undefined): Promise<string | null> {
  if (!act) return null;
  const [row] = await ctx.db.select({ act: trail.act }).from(trail).where(actIs(act)).limit(1);
  return row ? act : null;
}

const actIs = (act: string): SQL =>
  act.endsWith(".") ? like(trail.act, `${act.replace(/[\\%_]/g, "\\$&")}%`) : eq(trail.act, act);

async function caseIdOf(ctx: Context, idOrNumber: string | undefined): Promise<string | undefined | null> {
  if (idOrNumber === undefined || !/^\d+$/.test(idOrNumber)) return idOrNumber;
  const [row] = await ctx.db
    .select({ id: cases.id })
    .from(cases)
    .where(eq(cases.number, Number(idOrNumber)));
  return row?.id ?? null;
}

const cursorOf = (seq: number): string => Buffer.from(`before ${seq}`).toString("base64url");

function seqOf(cursor: string): number {
  const seq = /^before (\d{1,15})$/.exec(Buffer.from(cursor, "base64url").toString())?.[1];
  if (!seq) throw invalid([{ path: "cursor", message: "is not one that this list gave out" }]);
  return Number(seq);
}
