import type { Channel } from "../transactions/codes";
import type { Activity } from "./activity";
import type { LabelledPast } from "./labelled-past";

export const HOUR_MS = 3_600_000;
export const DAY_MS = 24 * HOUR_MS;
/** How far back history is read. */
export const HISTORY_MS = 30 * DAY_MS;
export const WINDOWS = [
  { key: "1h", name: "1 h", ms: HOUR_MS },
  { key: "24h", name: "24 h", ms: DAY_MS },
  { key: "7d", name: "7 d", ms: 7 * DAY_MS },
  { key: "30d", name: "30 d", ms: HISTORY_MS },
] as const;

export const ENTITY_KINDS = ["account", "card", "device", "counterparty"] as const;
export type EntityKind = (typeof ENTITY_KINDS)[number];

/** Amounts up to this many minor units of the base currency count as very small: the size a stolen card is tried with. */
const VERY_SMALL_MINOR = 500;
/** An hour counts as usual where it lies within so many hours of a past payment's hour, around the clock. */
const NEAR_HOURS = 2;
/** Fewer past payments than this say nothing about an account's hours. */
const HOURS_NEED = 5;

/** What the signals may read of a payment. Nothing about the person: no age, sex, origin or health, by design. */
export type PaymentFields = {
  /** Only for payments that are stored already: tells them from their own history. */
  id?: string;
  occurredAtMs: number;
  /** In minor units of the base currency; null while no rate is known. */
  amountBaseMinor: number | null;
  direction: "outgoing" | "incoming";
  channel: Channel;
  remote: boolean | null;
  counterpartyId: string;
  cardRef: string | null;
  deviceId: string | null;
  counterpartyCountry: string | null;
  accountCountry: string | null;
  authentication: "strong" | "single" | "none" | "exempt" | null;
  accountOpenedAtMs: number | null;
  upstreamScore: number | null;
  /** Null where the sender passes no list along. */
  ruleHits: number | null;
};

/** Past payments and labels of the payment's entities; null where the payment has no such entity. */
export type PaymentHistory = Record<EntityKind, { activity: Activity; labels: LabelledPast } | null>;

type EntityFacts = {
  /** By window, in the order of WINDOWS. */
  counts: number[];
  /** Sum of amounts by window, in minor units of the base currency. */
  valuesMinor: number[];
  verySmallIn24h: number;
  othersIn24h: number;
};
export type LabelFacts = { in7d: LabelCount; in14d: LabelCount; in30d: LabelCount; ever: LabelCount };
type LabelCount = { fraudulent: number; legitimate: number };

/** Everything the catalogue measures, taken from the history in one pass over each entity. */
export type Facts = {
  payment: PaymentFields;
  entities: Record<EntityKind, EntityFacts | null>;
  labels: Record<EntityKind, LabelFacts | null>;
  /** Of the account's amounts in the payment's direction in 30 d; null where it has none. */
  usualMinor: number | null;
  largestMinor: number | null;
  /** Null for an account without payments in 30 d. */
  idleMs: number | null;
  isNewCounterparty: boolean | null;
  isNewDevice: boolean | null;
  isNewCountry: boolean | null;
  /** Share of the account's payments in 30 d whose hour lies near this one's; null where there are too few. */
  nearHourShare: number | null;
};

/** As of the payment's own time; payments that happened later are not seen, nor is the payment itself. */
export function measureFacts(payment: PaymentFields, history: PaymentHistory): Facts {
  const ends = (activity: Activity) =>
    payment.id === undefined
      ? activity.endAt(payment.occurredAtMs)
      : activity.endBefore(payment.occurredAtMs, payment.id);
  const entityFacts = (kind: EntityKind) => {
    const entity = history[kind];
    return entity && measureEntity(entity.activity, ends(entity.activity), payment.occurredAtMs);
  };
  const labelFacts = (kind: EntityKind) => {
    const entity = history[kind];
    return entity && measureLabels(entity.labels, payment);
  };
  const account = history.account?.activity;
  return {
    payment,
    entities: {
      account: entityFacts("account"),
      card: entityFacts("card"),
      device: entityFacts("device"),
      counterparty: entityFacts("counterparty"),
    },
    labels: {
      account: labelFacts("account"),
      card: labelFacts("card"),
      device: labelFacts("device"),
      counterparty: labelFacts("counterparty"),
    },
    ...(account ? measureAccount(account, ends(account), payment) : NO_ACCOUNT),
  };
}

function measureEntity(activity: Activity, end: number, atMs: number): EntityFacts {
  const counts = [0, 0, 0, 0];
  const valuesMinor = [0, 0, 0, 0];
  const others = new Set<string>();
  let verySmallIn24h = 0;
  let count = 0;
  let valueMinor = 0;
  let window = 0;
  for (let i = end - 1; i >= 0; i--) {
    const ageMs = atMs - (activity.atMs[i] as number);
    while (window < WINDOWS.length && ageMs >= (WINDOWS[window]?.ms ?? 0)) {
      counts[window] = count;
      valuesMinor[window] = valueMinor;
      window++;
    }
    if (window === WINDOWS.length) break;
    const amountMinor = activity.amountsBaseMinor[i] as number;
    count++;
    if (!Number.isNaN(amountMinor)) valueMinor += amountMinor;
    if (ageMs < DAY_MS) {
      others.add(activity.others[i] as string);
      if (amountMinor <= VERY_SMALL_MINOR) verySmallIn24h++;
    }
  }
  for (; window < WINDOWS.length; window++) {
    counts[window] = count;
    valuesMinor[window] = valueMinor;
  }
  return { counts, valuesMinor, verySmallIn24h, othersIn24h: others.size };
}

const NONE: LabelCount = { fraudulent: 0, legitimate: 0 };
const NO_LABELS: LabelFacts = { in7d: NONE, in14d: NONE, in30d: NONE, ever: NONE };

function measureLabels(labels: LabelledPast, payment: PaymentFields): LabelFacts {
  if (labels.isEmpty) return NO_LABELS;
  const within = (windowMs: number) => labels.count(payment.occurredAtMs, windowMs, payment.id);
  return {
    in7d: within(7 * DAY_MS),
    in14d: within(14 * DAY_MS),
    in30d: within(30 * DAY_MS),
    ever: within(Number.POSITIVE_INFINITY),
  };
}

const NO_ACCOUNT = {
  usualMinor: null,
  largestMinor: null,
  idleMs: null,
  isNewCounterparty: null,
  isNewDevice: null,
  isNewCountry: null,
  nearHourShare: null,
};

function measureAccount(activity: Activity, end: number, payment: PaymentFields) {
  const from = activity.endAt(payment.occurredAtMs - HISTORY_MS);
  if (from >= end) return NO_ACCOUNT;
  const amounts = new Float64Array(end - from);
  const hour = hourOf(payment.occurredAtMs);
  let amountCount = 0;
  let nearCount = 0;
  let sameCounterparty = false;
  let sameDevice = false;
  let sameCountry = false;
  const isIncoming = payment.direction === "incoming";
  for (let i = from; i < end; i++) {
    const amountMinor = activity.amountsBaseMinor[i] as number;
    const sameDirection = activity.incoming[i] === isIncoming;
    if (sameDirection && !Number.isNaN(amountMinor)) amounts[amountCount++] = amountMinor;
    const apart = Math.abs(hour - hourOf(activity.atMs[i] as number));
    if (Math.min(apart, 24 - apart) <= NEAR_HOURS) nearCount++;
    sameCounterparty ||= activity.others[i] === payment.counterpartyId;
    sameDevice ||= activity.devices[i] === payment.deviceId;
    sameCountry ||= activity.countries[i] === payment.counterpartyCountry;
  }
  const sorted = amounts.subarray(0, amountCount).sort();
  return {
    usualMinor: sorted.length > 0 ? median(sorted) : null,
    largestMinor: sorted.at(-1) ?? null,
    idleMs: payment.occurredAtMs - (activity.atMs[end - 1] as number),
    isNewCounterparty: !sameCounterparty,
    isNewDevice: payment.deviceId === null ? null : !sameDevice,
    isNewCountry: payment.counterpartyCountry === null ? null : !sameCountry,
    nearHourShare: end - from < HOURS_NEED ? null : nearCount / (end - from),
  };
}

function median(sorted: Float64Array): number {
  const middle = sorted.length >>> 1;
  const upper = sorted[middle] as number;
  return sorted.length % 2 === 1 ? upper : (upper + (sorted[middle - 1] as number)) / 2;
}

/** Hour of the day in UTC, 0 to 24, with its fraction. */
export function hourOf(atMs: number): number {
  const ofDay = ((atMs % DAY_MS) + DAY_MS) % DAY_MS;
  return ofDay / HOUR_MS;
}
