import "server-only";
import type { RowDataPacket } from "mysql2";
import type { Database } from "@/db/client";
import type { Label } from "../scorer";
import { ENTITY_KINDS, type EntityKind } from "./facts";
import { type KnownEntity, KnownHistory, type PaymentKeys } from "./known-history";

/**
 * Newest payments read of one entity. A marketplace may have more in thirty days; its counts then stand at the end
 * of their scale, and no batch reads without bound.
 */
export const NEWEST_READ = 1_000;
const ENTITIES_IN_STATEMENT = 250;
/** Most entities have some dozens of payments in thirty days; where some have far more, each is read by itself. */
const ROWS_PER_ENTITY = 200;
const KEYS_IN_STATEMENT = 1_000;
/** One statement is worked on by the database while the rows of another are taken in. */
const STATEMENTS_AT_ONCE = 3;

const KEY_COLUMN: Record<EntityKind, string> = {
  account: "account_id",
  card: "card_ref",
  device: "device_id",
  counterparty: "counterparty_id",
};

/** Whole milliseconds since 1970, whatever the session's time zone; faster to take in than a date. */
const OCCURRED_MS = "timestampdiff(microsecond, '1970-01-01', occurred_at) div 1000";

/** Key, milliseconds, amount, the other side, device, country, 1 if incoming, and the id if it was asked for. */
type PastRow = [
  string,
  number,
  number | null,
  string,
  string | null,
  string | null,
  number,
  string | undefined,
];
type LabelRow = [EntityKind, string, string, Label, number];

/**
 * The last thirty days of each payment's account, card, device and counterparty, and all labels known of them now.
 * The number of statements grows with the entities by 250 and the rows of each entity are limited; every one is
 * answered from an index alone. Raw rows through the pool: this is the busiest read of an import.
 * @param withIds for payments that are stored already and must not see themselves
 */
export async function readHistory(
  db: Database,
  payments: readonly PaymentKeys[],
  { withIds = false } = {},
): Promise<KnownHistory> {
  const history = new KnownHistory(payments);
  const entities = ENTITY_KINDS.flatMap((kind) => history.entities(kind));
  const reads: (() => Promise<void>)[] = [
    ...ENTITY_KINDS.flatMap((kind) =>
      pieces(history.entities(kind), ENTITIES_IN_STATEMENT).map(
        (some) => () => readActivity(db, kind, some, withIds),
      ),
    ),
    ...pieces(entities, KEYS_IN_STATEMENT).map((some) => () => readLabels(db, some, history)),
  ];
  let next = 0;
  const lane = async () => {
    while (next < reads.length) await reads[next++]?.();
  };
  await Promise.all(Array.from({ length: STATEMENTS_AT_ONCE }, lane));
  return history;
}

async function readActivity(
  db: Database,
  kind: EntityKind,
  entities: readonly KnownEntity[],
  withIds: boolean,
): Promise<void> {
  const columns = columnsOf(kind, withIds);
  const fromMs = entities.reduce((least, each) => Math.min(least, each.fromMs), Number.POSITIVE_INFINITY);
  const toMs = entities.reduce((most, each) => Math.max(most, each.toMs), Number.NEGATIVE_INFINITY);
  const rowsAtMost = Math.max(NEWEST_READ, ROWS_PER_ENTITY * entities.length);
  const rows = await rowsOf<PastRow>(
    db,
    `select ${columns} from transactions where ${KEY_COLUMN[kind]} in (?) and occurred_at > ? and occurred_at <= ?
      order by ${KEY_COLUMN[kind]}, occurred_at limit ${rowsAtMost + 1}`,
    [entities.map(({ key }) => key), new Date(fromMs), new Date(toMs)],
  );
  if (rows.length <= rowsAtMost) addRows(entities, rows);
  else addRows(entities, await newestOfEach(db, kind, entities, columns));
}

/** Oldest first for each entity, with no more than the newest thousand of any. */
async function newestOfEach(
  db: Database,
  kind: EntityKind,
  entities: readonly KnownEntity[],
  columns: string,
): Promise<PastRow[]> {
  const select = `(select ${columns} from transactions where ${KEY_COLUMN[kind]} = ? and occurred_at > ? and occurred_at <= ?
    order by occurred_at desc limit ${NEWEST_READ})`;
  const values = entities.flatMap(({ key, fromMs, toMs }) => [key, new Date(fromMs), new Date(toMs)]);
  const rows = await rowsOf<PastRow>(db, entities.map(() => select).join(" union all "), values);
  return rows.reverse();
}

function columnsOf(kind: EntityKind, withIds: boolean): string {
  const others =
    kind === "account"
      ? "counterparty_id, device_id, counterparty_country, direction = 'incoming'"
      : "account_id, null, null, 0";
  return `${KEY_COLUMN[kind]}, ${OCCURRED_MS}, amount_base_minor, ${others}${withIds ? ", id" : ""}`;
}

function addRows(entities: readonly KnownEntity[], rows: readonly PastRow[]): void {
  const byKey = new Map(entities.map((entity) => [entity.key, entity]));
  let entity: KnownEntity | undefined;
  for (const [key, atMs, amountBaseMinor, other, device, country, incoming, id] of rows) {
    // One entity's rows stand together.
    if (entity?.key !== key) entity = byKey.get(key);
    entity?.activity.add({
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
  entities: readonly KnownEntity[],
  history: KnownHistory,
): Promise<void> {
  const asked = ENTITY_KINDS.map((kind) => ({
    kind,
    keys: entities.filter((entity) => entity.kind === kind).map(({ key }) => key),
  })).filter(({ keys }) => keys.length > 0);
  const rows = await rowsOf<LabelRow>(
    db,
    `select entity_kind, entity_key, transaction_id, label, ${OCCURRED_MS} from labelled_entities
      where ${asked.map(() => "(entity_kind = ? and entity_key in (?))").join(" or ")}`,
    asked.flatMap(({ kind, keys }) => [kind, keys]),
  );
  for (const [kind, key, transactionId, label, atMs] of rows) {
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
