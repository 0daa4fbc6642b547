import type { Account } from "./accounts";
import { momentOn } from "./everyday";
import { fraud, type Payment } from "./payment";
import type { Chance } from "./random";

/** A pattern says what its fraudsters do on one day of the scenario. */
export type Pattern = (
  chance: Chance,
  accounts: readonly Account[],
  day: Date,
  dayNumber: number,
) => Payment[];

/** Stolen card details tried with a few cents at a voucher shop, then spent on things that sell again. */
const detailsTried: Pattern = (chance, accounts, day) => {
  if (!chance.hits(0.55)) return [];
  const account = chance.pick(accounts);
  const first = momentOn(chance, day, chance.whole(1, 5));
  const minutesLater = (minutes: number) => new Date(first.getTime() + minutes * 60_000);
  const device = `dev-x${chance.whole(1, 40)}`;
  const base = { account, channel: "card_remote" as const, deviceId: device, ipAddress: "198.51.100.23" };
  const trials = Array.from({ length: chance.whole(2, 5) }, (_, index) => ({
    ...base,
    at: minutesLater(index * 2),
    amountMinor: chance.whole(50, 290),
    counterpartyId: "WEB-8",
    counterpartyName: "Cardamom Gift Vouchers",
    mcc: "5947",
    counterpartyCountry: "NL",
    authentication: "none" as const,
    ruleHits: ["small-amount-burst"],
    truth: fraud("details_theft"),
  }));
  const spending = Array.from({ length: chance.whole(1, 2) }, (_, index) => ({
    ...base,
    at: minutesLater(25 + 17 * index),
    amountMinor: chance.amountMinor(62_000, 0.4),
    counterpartyId: chance.hits(0.5) ? "WEB-1" : "WEB-7",
    counterpartyName: "Voltkiste Electronics",
    mcc: "5732",
    counterpartyCountry: "NL",
    authentication: "none" as const,
    truth: fraud("details_theft"),
  }));
  return [...trials, ...spending];
};

/** Somebody else signs in from a new device at night and empties the account to a new payee. */
const accountTakenOver: Pattern = (chance, accounts, day) => {
  if (!chance.hits(0.4)) return [];
  const account = chance.pick(accounts);
  const first = momentOn(chance, day, chance.whole(0, 4));
  const mule = `MULE-${chance.whole(1, 12)}`;
  return Array.from({ length: chance.whole(1, 3) }, (_, index) => ({
    at: new Date(first.getTime() + index * 11 * 60_000),
    account,
    channel: "instant_transfer" as const,
    amountMinor: chance.amountMinor(240_000, 0.5),
    counterpartyId: mule,
    counterpartyName: "Private payee",
    deviceId: `dev-t${chance.whole(1, 25)}`,
    ipAddress: "203.0.113.77",
    counterpartyCountry: chance.pick(["IE", "ES"] as const),
    authentication: "single" as const,
    truth: fraud("issued_by_fraudster"),
  }));
};

/** One till copies cards for eight days; the copies are used at cash machines abroad. */
const copiedCards: Pattern = (chance, accounts, day, dayNumber) => {
  if (dayNumber < 6 || dayNumber > 14) return [];
  return Array.from({ length: chance.whole(1, 3) }, () => ({
    at: momentOn(chance, day),
    account: chance.pick(accounts),
    channel: "cash_withdrawal" as const,
    amountMinor: chance.pick([30_000, 40_000, 50_000]),
    counterpartyId: "ATM-90",
    counterpartyName: "Machine abroad",
    mcc: "6011",
    counterpartyCountry: "PT",
    authentication: "single" as const,
    truth: fraud("counterfeit"),
  }));
};

const LATE_START_DAY = 19;

/** Callers talk customers into moving their savings "to safety": own device, strong authentication. Starts late. */
const savingsToSafety: Pattern = (chance, accounts, day, dayNumber) => {
  if (dayNumber < LATE_START_DAY) return [];
  return Array.from({ length: chance.whole(1, 3) }, () => {
    const account = chance.pick(accounts);
    const safe = chance.whole(1, 4);
    return {
      at: momentOn(chance, day, chance.whole(10, 16)),
      account,
      channel: "credit_transfer" as const,
      amountMinor: chance.amountMinor(480_000, 0.4),
      counterpartyId: `SAFE-${safe}`,
      counterpartyName: "Safe custody account",
      deviceId: account.deviceId,
      ipAddress: account.ipAddress,
      counterpartyCountry: "FR",
      authentication: "strong" as const,
      truth: fraud("payer_manipulated"),
    };
  });
};

export const PATTERNS: readonly Pattern[] = [detailsTried, accountTakenOver, copiedCards, savingsToSafety];
