import "server-only";
import { inArray } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { apiKeys, people } from "@/db/schema/people";
import type { trail } from "@/db/schema/trail";
import type { TrailEntryView } from "./schema";

type Row = typeof trail.$inferSelect;

/** Entries with the names that their references have today: the trail itself holds none. */
export async function entryViews(db: Executor, rows: readonly Row[]): Promise<TrailEntryView[]> {
  const [personNames, keyNames, caseNumbers] = await Promise.all([
    personNamesOf(db, rows),
    keyNamesOf(db, rows),
    caseNumbersOf(db, rows),
  ]);
  const nameOf = (kind: string, id: string): string | null => {
    if (kind === "person") return personNames.get(id) ?? null;
    return kind === "key" ? (keyNames.get(id) ?? null) : null;
  };
  return rows.map((row) => {
    const number = row.caseId ? caseNumbers.get(row.caseId) : undefined;
    return {
      seq: row.seq,
      at: row.at.toISOString(),
      act: row.act,
      actor: {
        kind: row.actorKind,
        id: row.actorId,
        name: nameOf(row.actorKind, row.actorId),
        onBehalfOf: row.onBehalfOf
          ? { id: row.onBehalfOf, name: nameOf("person", row.onBehalfOf) ?? "" }
          : null,
      },
      subject: {
        kind: row.subjectKind,
        id: row.subjectId,
        name: nameOf(row.subjectKind, row.subjectId),
      },
      case: row.caseId && number !== undefined ? { id: row.caseId, number } : null,
      requestId: row.requestId,
      facts: JSON.parse(row.facts) as Record<string, unknown>,
      hash: row.hash.toString("hex"),
    };
  });
}

async function personNamesOf(db: Executor, rows: readonly Row[]): Promise<Map<string, string>> {
  const ids = idsOf(rows, "person", (row) => row.onBehalfOf);
  if (ids.length === 0) return new Map();
  const found = await db
    .select({ id: people.id, name: people.name })
    .from(people)
    .where(inArray(people.id, ids));
  return new Map(found.map(({ id, name }) => [id, name]));
}

async function keyNamesOf(db: Executor, rows: readonly Row[]): Promise<Map<string, string>> {
  const ids = idsOf(rows, "key", () => null);
  if (ids.length === 0) return new Map();
  const found = await db
    .select({ id: apiKeys.id, name: apiKeys.name })
    .from(apiKeys)
    .where(inArray(apiKeys.id, ids));
  return new Map(found.map(({ id, name }) => [id, name]));
}

async function caseNumbersOf(db: Executor, rows: readonly Row[]): Promise<Map<string, number>> {
  const ids = [...new Set(rows.flatMap((row) => row.caseId ?? []))];
  if (ids.length === 0) return new Map();
  const found = await db
    .select({ id: cases.id, number: cases.number })
    .from(cases)
    .where(inArray(cases.id, ids));
  return new Map(found.map(({ id, number }) => [id, number]));
}

const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

function idsOf(rows: readonly Row[], kind: string, also: (row: Row) => string | null): string[] {
  const ids = rows.flatMap((row) => [
    row.actorKind === kind ? row.actorId : "",
    row.subjectKind === kind ? row.subjectId : "",
    also(row) ?? "",
  ]);
  return [...new Set(ids.filter((id) => UUID.test(id)))];
}
