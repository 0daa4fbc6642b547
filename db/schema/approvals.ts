import { sql } from "drizzle-orm";
import { char, check, index, int, mysqlEnum, mysqlTable, text, uniqueIndex } from "drizzle-orm/mysql-core";
import { APPROVAL_KINDS, APPROVAL_STATES, type ApprovalSubject } from "../../lib/approvals/codes";
import { instant, json, uuid } from "../columns";
import { people } from "./people";

/** What needs a second person before it is done: asked for by one, approved or refused by another. */
export const approvals = mysqlTable(
  "approvals",
  {
    id: uuid().primaryKey(),
    kind: mysqlEnum(APPROVAL_KINDS).notNull(),
    /** What exactly shall be done: ids and codes only. */
    subject: json<ApprovalSubject>()().notNull(),
    state: mysqlEnum(APPROVAL_STATES).notNull(),
    /** Set while it waits: the unique index allows one wish for the same thing at a time. */
    waitingFor: char({ length: 32 }).generatedAlwaysAs(
      sql`(if(state = 'waiting', md5(concat(cast(kind as binary), cast(subject as binary))), null))`,
      { mode: "stored" },
    ),
    reason: text().notNull(),
    proposedBy: uuid()
      .notNull()
      .references(() => people.id),
    proposedAt: instant().notNull(),
    settledBy: uuid().references(() => people.id),
    settledAt: instant(),
    /** Why it was refused. */
    settledReason: text(),
    revision: int().notNull().default(1),
  },
  (table) => [
    index("approvals_state").on(table.state, table.proposedAt),
    uniqueIndex("approvals_waiting_for").on(table.waitingFor),
    check("approvals_settled", sql`(${table.state} = 'waiting') = (${table.settledAt} is null)`),
    // Nobody approves or refuses their own wish; only its author withdraws it.
    check(
      "approvals_second_person",
      sql`${table.state} = 'waiting' or (${table.settledBy} = ${table.proposedBy}) = (${table.state} = 'withdrawn')`,
    ),
  ],
);
