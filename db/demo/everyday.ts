import type { Account } from "./accounts";
import { COUNTRIES } from "./names";
import { GENUINE, type Payment } from "./payment";
import type { Chance } from "./random";

/** Hours at which people pay, weighted: a lunch hump and an evening hump. */
const HOURS = [7, 8, 9, 10, 11, 12, 12, 13, 13, 14, 15, 16, 17, 17, 18, 18, 19, 20, 21, 22];

export function momentOn(chance: Chance, day: Date, hour = chance.pick(HOURS)): Date {
  return new Date(day.getTime() + hour * 3_600_000 + chance.whole(0, 3_599) * 1_000);
}

/** What the accounts do on an ordinary day, with the odd large or foreign payment that only looks bad. */
export function everydayPayments(chance: Chance, accounts: readonly Account[], day: Date): Payment[] {
  return accounts.flatMap((account) => {
    const count = Math.floor(account.perDay) + (chance.hits(account.perDay % 1) ? 1 : 0);
    return Array.from({ length: count }, () => everydayPayment(chance, account, day));
  });
}

function everydayPayment(chance: Chance, account: Account, day: Date): Payment {
  const kind = chance.unit();
  if (kind < 0.14) return transfer(chance, account, day);
  if (kind < 0.34) return remotePurchase(chance, account, day);
  if (kind < 0.38) return cash(chance, account, day);
  return tillPurchase(chance, account, day);
}

function tillPurchase(chance: Chance, account: Account, day: Date): Payment {
  const shop = chance.pick(account.shops);
  const away = chance.hits(0.03);
  return {
    at: momentOn(chance, day),
    account,
    channel: "card_present",
    amountMinor: chance.amountMinor(shop.medianMinor * account.scale, 0.5),
    counterpartyId: shop.id,
    counterpartyName: shop.name,
    mcc: shop.mcc,
    counterpartyCountry: away ? chance.pick(COUNTRIES) : "IE",
    authentication: chance.hits(0.7) ? "strong" : "exempt",
    truth: GENUINE,
  };
}

function remotePurchase(chance: Chance, account: Account, day: Date): Payment {
  const shop = chance.pick(account.remoteShops);
  const newDevice = chance.hits(0.04);
  return {
    at: momentOn(chance, day),
    account,
    channel: "card_remote",
    amountMinor: chance.amountMinor(shop.medianMinor * account.scale, 0.6),
    counterpartyId: shop.id,
    counterpartyName: shop.name,
    mcc: shop.mcc,
    deviceId: newDevice ? `${account.deviceId}2` : account.deviceId,
    ipAddress: account.ipAddress,
    counterpartyCountry: chance.hits(0.2) ? chance.pick(COUNTRIES) : "IE",
    authentication: chance.hits(0.75) ? "strong" : "exempt",
    truth: chance.hits(0.015) ? { verdict: "customer_misuse", typology: null } : GENUINE,
  };
}

function transfer(chance: Chance, account: Account, day: Date): Payment {
  const payee = chance.pick(account.payees);
  const oneOff = chance.hits(0.06);
  return {
    at: momentOn(chance, day),
    account,
    channel: chance.hits(0.4) ? "instant_transfer" : "credit_transfer",
    amountMinor: oneOff ? chance.amountMinor(120_000, 0.8) : chance.amountMinor(payee.amountMinor, 0.15),
    counterpartyId: oneOff ? `PAYEE-X${chance.whole(100, 999)}` : payee.id,
    counterpartyName: oneOff ? "Private payee" : payee.name,
    deviceId: account.deviceId,
    ipAddress: account.ipAddress,
    counterpartyCountry: "IE",
    authentication: "strong",
    truth: GENUINE,
  };
}

function cash(chance: Chance, account: Account, day: Date): Payment {
  return {
    at: momentOn(chance, day),
    account,
    channel: "cash_withdrawal",
    amountMinor: chance.pick([2_000, 5_000, 5_000, 10_000, 20_000]),
    counterpartyId: `ATM-${chance.whole(1, 18)}`,
    counterpartyName: "Brackwater Mutual machine",
    mcc: "6011",
    counterpartyCountry: "IE",
    authentication: "strong",
    truth: GENUINE,
  };
}
