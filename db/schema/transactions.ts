import { sql } from "drizzle-orm";
import {
  bigint,
  char,
  check,
  date,
  double,
  index,
  int,
  mysqlEnum,
  mysqlTable,
  primaryKey,
  tinyint,
  uniqueIndex,
  varchar,
} from "drizzle-orm/mysql-core";
import { ZONES } from "../../lib/policy/codes";
import {
  ACTIONS,
  AUTHENTICATIONS,
  CHANNELS,
  DIRECTIONS,
  IMPORT_STATES,
  PAYMENT_STATES,
} from "../../lib/transactions/codes";
import { bytes, instant, json, uuid } from "../columns";
import { people } from "./people";

export const transactions = mysqlTable(
  "transactions",
  {
    id: uuid().primaryKey(),
    /** Order of arrival: ties in the ranking break by it. */
    seq: bigint({ mode: "number" }).notNull().autoincrement().unique(),
    source: varchar({ length: 64 }).notNull(),
    externalId: varchar({ length: 64 }).notNull(),
    /** SHA-256 over the item as sent: tells a repeat from a different payment under the same identifier. */
    contentHash: bytes({ length: 32, fixed: true }).notNull(),
    receivedAt: instant().notNull(),
    occurredAt: instant().notNull(),
    amountMinor: bigint({ mode: "number" }).notNull(),
    currency: char({ length: 3 }).notNull(),
    /** In the base currency by the rate of the day; null while no rate is known. */
    amountBaseMinor: bigint({ mode: "number" }),
    direction: mysqlEnum(DIRECTIONS).notNull(),
    channel: mysqlEnum(CHANNELS).notNull(),
    remote: tinyint(),
    accountId: varchar({ length: 64 }).notNull(),
    counterpartyId: varchar({ length: 64 }).notNull(),
    counterpartyName: varchar({ length: 140 }),
    cardRef: varchar({ length: 64 }),
    deviceId: varchar({ length: 64 }),
    ipAddress: varchar({ length: 45 }),
    mcc: char({ length: 4 }),
    counterpartyCountry: char({ length: 2 }),
    accountCountry: char({ length: 2 }),
    authentication: mysqlEnum(AUTHENTICATIONS),
    accountOpenedAt: instant(),
    upstreamScore: double(),
    ruleHits: json<string[]>()(),
    attributes: json<Record<string, string | number | boolean>>()(),
    action: mysqlEnum(ACTIONS).notNull(),
    paymentState: mysqlEnum(PAYMENT_STATES).notNull(),
    holdExpiresAt: instant(),
    /** Final label in force: 1 fraudulent, -1 legitimate, null unlabelled. Kept in step with the label log. */
    label: tinyint(),
  },
  (table) => [
    uniqueIndex("transactions_external").on(table.source, table.externalId),
    // Outcomes may name a transaction of any source.
    index("transactions_external_any").on(table.externalId),
    // History signals: the newest payments of each entity of a batch, in 30 days. The indexes hold all that is
    // read, because a lookup of the row for each of some hundred thousand past payments would be the slowest part.
    index("transactions_account").on(
      table.accountId,
      table.occurredAt,
      table.amountBaseMinor,
      table.counterpartyId,
      table.deviceId,
      table.counterpartyCountry,
      table.direction,
    ),
    index("transactions_counterparty").on(
      table.counterpartyId,
      table.occurredAt,
      table.amountBaseMinor,
      table.accountId,
    ),
    index("transactions_card").on(table.cardRef, table.occurredAt, table.amountBaseMinor, table.accountId),
    index("transactions_device").on(table.deviceId, table.occurredAt, table.amountBaseMinor, table.accountId),
    // Weekly totals and fraud rates.
    index("transactions_occurred").on(table.occurredAt),
    check("transactions_amount", sql`${table.amountMinor} >= 0`),
    check("transactions_label", sql`${table.label} in (-1, 1)`),
    check("transactions_upstream", sql`${table.upstreamScore} between 0 and 1`),
  ],
);

/** One row per scoring: the vector exactly as it was scored, never rewritten. */
export const scores = mysqlTable(
  "scores",
  {
    id: bigint({ mode: "number" }).primaryKey().autoincrement(),
    transactionId: uuid()
      .notNull()
      .references(() => transactions.id),
    kind: mysqlEnum(["arrival", "refresh"]).notNull(),
    takenAt: instant().notNull(),
    vector: bytes({ length: 4096 }).notNull(),
    /** One bit per signal of the set: 1 where a field it needs was missing. */
    missing: bytes({ length: 64 }).notNull(),
    signalSetVersion: int().notNull(),
    scorerVersion: bigint({ mode: "number" }).notNull(),
    policyVersion: int().notNull(),
    logit: double().notNull(),
    leverage: double().notNull(),
    zone: mysqlEnum(ZONES).notNull(),
  },
  (table) => [
    index("scores_transaction").on(table.transactionId, table.kind),
    // Capacity cut and distribution of recent scores.
    index("scores_recent").on(table.kind, table.takenAt, table.logit),
  ],
);

/** Which entities carry a label in force; far smaller than an index over every transaction. */
export const labelledEntities = mysqlTable(
  "labelled_entities",
  {
    entityKind: mysqlEnum(["account", "counterparty", "card", "device"]).notNull(),
    entityKey: varchar({ length: 64 }).notNull(),
    transactionId: uuid()
      .notNull()
      .references(() => transactions.id),
    label: tinyint().notNull(),
    occurredAt: instant().notNull(),
    labelledAt: instant().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.entityKind, table.entityKey, table.transactionId] }),
    index("labelled_entities_transaction").on(table.transactionId),
  ],
);

export const signalSets = mysqlTable("signal_sets", {
  version: int().primaryKey(),
  /** Keys and formulas of the catalogue in the order of the vector, and the team's own signals behind it. */
  definition: json<unknown>()().notNull(),
  createdAt: instant().notNull(),
  /** When every waiting case had been scored by it. */
  rescoredAt: instant(),
});

/** How many payments of a day came in and passed: what the chance of a sample is reckoned from. */
export const arrivalDays = mysqlTable("arrival_days", {
  day: date({ mode: "string" }).primaryKey(),
  received: int().notNull(),
  passed: int().notNull(),
});

export const currencyRates = mysqlTable(
  "currency_rates",
  {
    currency: char({ length: 3 }).notNull(),
    day: date({ mode: "string" }).notNull(),
    /** Units of the base currency for one unit of this one. */
    rate: double().notNull(),
  },
  (table) => [primaryKey({ columns: [table.currency, table.day] })],
);

export const imports = mysqlTable(
  "imports",
  {
    id: uuid().primaryKey(),
    source: varchar({ length: 64 }).notNull(),
    fileName: varchar({ length: 255 }).notNull(),
    /** Header in the file → field of ours, or null for a column left out. */
    mapping: json<Record<string, string | null>>()().notNull(),
    state: mysqlEnum(IMPORT_STATES).notNull(),
    personId: uuid().references(() => people.id),
    createdAt: instant().notNull(),
    finishedAt: instant(),
    sizeBytes: bigint({ mode: "number" }).notNull().default(0),
    readBytes: bigint({ mode: "number" }).notNull().default(0),
    /** Rows committed so far; a restarted import goes on behind them. */
    rowsDone: int().notNull().default(0),
    created: int().notNull().default(0),
    duplicates: int().notNull().default(0),
    rejected: int().notNull().default(0),
    casesOpened: int().notNull().default(0),
    problem: varchar({ length: 400 }),
    leaseOwner: varchar({ length: 64 }),
    /** While it is received: until when a next piece must have come. While it is read: until when it is ours. */
    leaseExpiresAt: instant(),
    /** Times it was taken up since the last batch that was committed. */
    attempts: int().notNull().default(0),
  },
  (table) => [index("imports_state").on(table.state, table.createdAt)],
);

/** The uploaded file in pieces, so that any server can take the import over. */
export const importChunks = mysqlTable(
  "import_chunks",
  {
    importId: uuid()
      .notNull()
      .references(() => imports.id),
    part: int().notNull(),
    content: bytes({}).notNull(),
  },
  (table) => [primaryKey({ columns: [table.importId, table.part] })],
);

export const importErrors = mysqlTable(
  "import_errors",
  {
    id: bigint({ mode: "number" }).primaryKey().autoincrement(),
    importId: uuid()
      .notNull()
      .references(() => imports.id),
    row: int().notNull(),
    externalId: varchar({ length: 64 }),
    path: varchar({ length: 120 }).notNull(),
    message: varchar({ length: 400 }).notNull(),
  },
  (table) => [index("import_errors_import").on(table.importId, table.row)],
);
