import type { Facts } from "./facts";
import { logScale, ratioScale } from "./scale";
import { part, roughly, type Signal } from "./signal";

/** Amounts are measured in hundreds of minor units: euros, where the base currency is the euro. */
export const UNIT_MINOR = 100;

const amount = ({ payment }: Facts) =>
  payment.amountBaseMinor === null ? null : payment.amountBaseMinor / UNIT_MINOR;

/** Ratio to an amount of the account's own past; both raised by one unit, so that pennies do not make giants. */
const against = (past: (facts: Facts) => number | null) => (facts: Facts) => {
  const now = amount(facts);
  const before = past(facts);
  return now === null || before === null ? null : (now + 1) / (before / UNIT_MINOR + 1);
};

export const amountSignals: readonly Signal[] = [
  {
    key: "amount_size",
    name: "Size of the amount",
    sentence:
      "How large the payment is in the base currency; large and very large amounts stand out on their own.",
    needs: ["amount"],
    parts: [
      part("amount", amount, logScale(50, 5_000), [
        { from: 100, to: 200 },
        { from: 200, to: 250 },
        { from: 250, to: 1_000 },
        { from: 1_000, to: 10_000 },
      ]),
    ],
    reading: ([size = 0]) => `about ${roughly(size)}`,
  },
  {
    key: "amount_against_usual",
    name: "Amount against the account's usual",
    sentence: "How many times the account's median amount of the last 30 days this payment is.",
    needs: ["amount"],
    parts: [
      part(
        "(amount + 1) / (median of the account's amounts in 30 d + 1)",
        against((facts) => facts.usualMinor),
        ratioScale(10),
        [
          { from: 1.5, to: 2.5 },
          { from: 2.5, to: 4 },
          { from: 4, to: 8 },
        ],
      ),
    ],
    reading: ([times = 1]) => `${roughly(times)} times the usual`,
  },
  {
    key: "amount_against_largest",
    name: "Amount against the account's largest",
    sentence: "How this payment compares with the largest of the account's last 30 days.",
    needs: ["amount"],
    parts: [
      part(
        "(amount + 1) / (largest of the account's amounts in 30 d + 1)",
        against((facts) => facts.largestMinor),
        ratioScale(10),
        [
          { from: 1, to: 2 },
          { from: 2, to: 5 },
        ],
      ),
    ],
    reading: ([times = 1]) => `${roughly(times)} times the largest`,
  },
];
