import { MERCHANTS, PAYEES, REMOTE_MERCHANTS } from "./names";
import type { Chance } from "./random";

export type Shop = { id: string; name: string; mcc: string; medianMinor: number };

export type Account = {
  id: string;
  cardRef: string;
  deviceId: string;
  ipAddress: string;
  openedAt: Date;
  /** How this account's amounts compare with the shop's. */
  scale: number;
  shops: Shop[];
  remoteShops: Shop[];
  payees: { id: string; name: string; amountMinor: number }[];
  perDay: number;
};

const SHOPS_PER_CHAIN = 4;

/** Every chain has a few tills, each a counterparty of its own. */
export function makeShops(): { local: Shop[]; remote: Shop[] } {
  const local = MERCHANTS.flatMap((merchant, chain) =>
    Array.from({ length: SHOPS_PER_CHAIN }, (_, till) => ({
      ...merchant,
      id: `TILL-${chain + 1}${till + 1}`,
    })),
  );
  const remote = REMOTE_MERCHANTS.map((merchant, chain) => ({ ...merchant, id: `WEB-${chain + 1}` }));
  return { local, remote };
}

export function makeAccounts(
  chance: Chance,
  count: number,
  start: Date,
  shops: ReturnType<typeof makeShops>,
): Account[] {
  return Array.from({ length: count }, (_, index) => {
    const number = String(index + 1).padStart(4, "0");
    return {
      id: `ACC-${number}`,
      cardRef: `tok-${number}`,
      deviceId: `dev-${number}-a`,
      // 192.0.2.0/24 is set aside for documentation (RFC 5737).
      ipAddress: `192.0.2.${chance.whole(1, 254)}`,
      openedAt: new Date(start.getTime() - chance.whole(20, 3_000) * 86_400_000),
      scale: Math.exp(0.45 * chance.normal()),
      shops: Array.from({ length: chance.whole(4, 9) }, () => chance.pick(shops.local)),
      remoteShops: Array.from({ length: chance.whole(1, 3) }, () => chance.pick(shops.remote)),
      payees: Array.from({ length: chance.whole(1, 3) }, () => {
        const at = chance.whole(0, PAYEES.length - 1);
        return {
          id: `PAYEE-${at + 1}`,
          name: PAYEES[at] as string,
          amountMinor: chance.amountMinor(18_000, 0.7),
        };
      }),
      perDay: 0.25 + 1.1 * chance.unit(),
    };
  });
}
