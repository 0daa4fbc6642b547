import { bigint, index, int, mysqlEnum, mysqlTable, text, varchar } from "drizzle-orm/mysql-core";
import { bytes, instant, uuid } from "../columns";

/** Append-only: triggers refuse UPDATE and DELETE. Each hash covers the entry and the hash before it. */
export const trail = mysqlTable(
  "trail",
  {
    seq: bigint({ mode: "number" }).primaryKey(),
    at: instant().notNull(),
    act: varchar({ length: 64 }).notNull(),
    actorKind: mysqlEnum(["person", "key", "system", "anonymous"]).notNull(),
    actorId: varchar({ length: 64 }).notNull(),
    /** The person a key acted for. */
    onBehalfOf: uuid(),
    subjectKind: varchar({ length: 32 }).notNull(),
    subjectId: varchar({ length: 64 }).notNull(),
    caseId: uuid(),
    requestId: varchar({ length: 64 }).notNull(),
    /** Canonical JSON (RFC 8785), references only, no personal text. */
    facts: text().notNull(),
    previousHash: bytes({ length: 32, fixed: true }).notNull(),
    hash: bytes({ length: 32, fixed: true }).notNull(),
  },
  (table) => [
    index("trail_case").on(table.caseId, table.seq),
    index("trail_actor").on(table.actorId, table.seq),
    index("trail_act").on(table.act, table.seq),
    index("trail_at").on(table.at),
    index("trail_subject").on(table.subjectKind, table.subjectId),
  ],
);

/** The end of the chain; locked last in every write. */
export const trailHead = mysqlTable("trail_head", {
  id: int().primaryKey(),
  seq: bigint({ mode: "number" }).notNull(),
  hash: bytes({ length: 32, fixed: true }).notNull(),
});
