import "server-only";
import type { RowDataPacket } from "mysql2";
import type { Database } from "@/db/client";
import type { Label } from "../scorer";
import { ENTITY_KINDS, type EntityKind } from "./facts";
import { type KnownEntity, KnownHistory, type PaymentTrace } from "./known-history";

/**
 * Newest payments read of one entity. A marketplace may have more in thirty days; its counts then stand at the end
 * of their scale, and no batch reads without bound.
 */
export const NEWEST_READ = 1_000;
const ENTITIES_IN_STATEMENT = 250;
const KEYS_IN_STATEMENT = 1_000;
/** One statement is worked on by the database while the rows of another are taken in. */
const STATEMENTS_AT_ONCE = 2;

const KEY_COLUMN: Record<EntityKind, string> = {
  account: "account_id",
  card: "card_ref",
  device: "device_id",
  counterparty: "counterparty_id",
};

/** Whole milliseconds since 1970, whatever the session's time zone; faster to take in than a date. */
const OCCURRED_MS = "timestampdiff(microsecond, '1970-01-01', occurred_at) div 1000";

type PastRow = [
  number,
  number,
  number | null,
  string,
  string | null,
  string | null,
  number,
  string | undefined,
];
type LabelRow = [string, string, Label, number];

/**
 * The last thirty days of each payment's account, card, device and counterparty, and all labels known of them now.
 * The number of statements grows with the entities by 250 and the rows of each entity are limited; every one is
 * answered from an index alone. Raw rows through the pool: this is the busiest read of an import.
 * @param withIds for payments that are stored already and must not see themselves
 */
export async function readHistory(
  db: Database,
  payments: readonly PaymentTrace[],
  { withIds = false } = {},
): Promise<KnownHistory> {
  const history = new KnownHistory(payments);
  const entities = [...history.entities()];
  const reads: (() => Promise<void>)[] = [
    ...pieces(entities, ENTITIES_IN_STATEMENT).map((some) => () => readActivity(db, some, withIds)),
    ...ENTITY_KINDS.flatMap((kind) =>
      pieces(history.keys(kind), KEYS_IN_STATEMENT).map((keys) => () => readLabels(db, kind, keys, history)),
    ),
  ];
  let next = 0;
  const lane = async () => {
    while (next < reads.length) await reads[next++]?.();
  };
  await Promise.all(Array.from({ length: STATEMENTS_AT_ONCE }, lane));
  return history;
}

async function readActivity(db: Database, entities: readonly KnownEntity[], withIds: boolean): Promise<void> {
  const selects = entities.map(({ kind }, i) => {
    const others =
      kind === "account"
        ? "counterparty_id, device_id, counterparty_country, direction = 'incoming'"
        : "account_id, null, null, 0";
    return `(select ${i}, ${OCCURRED_MS}, amount_base_minor, ${others}${withIds ? ", id" : ""} from transactions
      where ${KEY_COLUMN[kind]} = ? and occurred_at > ? and occurred_at <= ? order by occurred_at desc limit ${NEWEST_READ})`;
  });
  const values = entities.flatMap(({ key, fromMs, toMs }) => [key, new Date(fromMs), new Date(toMs)]);
  const rows = await rowsOf<PastRow>(db, selects.join(" union all "), values);
  // From the end: each entity's rows come newest first, and oldest first they go in without moving others.
  for (let r = rows.length - 1; r >= 0; r--) {
    const [i, atMs, amountBaseMinor, other, device, country, incoming, id] = rows[r] as PastRow;
    entities[i]?.activity.add({
      atMs: Number(atMs),
      amountBaseMinor: amountBaseMinor ?? Number.NaN,
      other,
      device,
      country,
      incoming: incoming === 1,
      id,
    });
  }
}

async function readLabels(
  db: Database,
  kind: EntityKind,
  keys: readonly string[],
  history: KnownHistory,
): Promise<void> {
  const rows = await rowsOf<LabelRow>(
    db,
    `select entity_key, transaction_id, label, ${OCCURRED_MS} from labelled_entities where entity_kind = ? and entity_key in (?)`,
    [kind, keys],
  );
  for (const [key, transactionId, label, atMs] of rows) {
    history.find(kind, key)?.labels.add({ atMs: Number(atMs), label, transactionId });
  }
}

async function rowsOf<Row extends unknown[]>(db: Database, sql: string, values: unknown[]): Promise<Row[]> {
  const [rows] = await db.$client.query<RowDataPacket[][]>({ sql, values, rowsAsArray: true });
  return rows as unknown[][] as Row[];
}

function pieces<T>(items: readonly T[], size: number): T[][] {
  return Array.from({ length: Math.ceil(items.length / size) }, (_, i) =>
    items.slice(i * size, (i + 1) * size),
  );
}
