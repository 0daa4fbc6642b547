import { type Account, makeAccounts, makeShops } from "./accounts";
import { everydayPayments } from "./everyday";
import { PATTERNS } from "./fraud-patterns";
import { asSent, type DemoTransaction } from "./payment";
import { Chance } from "./random";

const DAY_MS = 86_400_000;

export const DEMO_DAYS = 28;
const ACCOUNT_COUNT = 320;

/**
 * Day by day, what an invented payment institution's system sends. The same seed and last day give the same payments.
 * @param lastDay midnight UTC of the scenario's last day
 */
export function* scenarioDays(
  seed: number,
  lastDay: Date,
): Generator<{ day: Date; dayNumber: number; transactions: DemoTransaction[] }> {
  const chance = new Chance(seed);
  const start = new Date(lastDay.getTime() - (DEMO_DAYS - 1) * DAY_MS);
  const accounts: Account[] = makeAccounts(chance, ACCOUNT_COUNT, start, makeShops());
  let number = 100_000;
  for (let dayNumber = 0; dayNumber < DEMO_DAYS; dayNumber++) {
    const day = new Date(start.getTime() + dayNumber * DAY_MS);
    const payments = [
      ...everydayPayments(chance, accounts, day),
      ...PATTERNS.flatMap((pattern) => pattern(chance, accounts, day, dayNumber)),
    ].sort((a, b) => a.at.getTime() - b.at.getTime());
    yield { day, dayNumber, transactions: payments.map((payment) => asSent(payment, `BM-${++number}`)) };
  }
}
