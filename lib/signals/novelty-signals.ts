import type { Facts } from "./facts";
import { asItIs, logScale } from "./scale";
import { part, plural, type Signal } from "./signal";

const isNew = (
  what: string,
  named: string,
  needs: string,
  value: (facts: Facts) => boolean | null,
): Signal => ({
  key: `new_${what}`,
  name: `First time this ${what} for the account`,
  sentence: `Whether the account had no payment with this ${named} in the last 30 days.`,
  needs: [needs],
  parts: [
    part(
      `1 where the ${named} is new for the account, else 0`,
      (facts) => {
        const answer = value(facts);
        return answer === null ? null : Number(answer);
      },
      asItIs,
    ),
  ],
  reading: ([flag = 0]) => (flag > 0 ? "first time in 30 days" : "seen before"),
});

export const noveltySignals: readonly Signal[] = [
  isNew("counterparty", "counterparty", "counterpartyId", (facts) => facts.isNewCounterparty),
  isNew("device", "device", "deviceId", (facts) => facts.isNewDevice),
  isNew("country", "counterparty's country", "counterpartyCountry", (facts) => facts.isNewCountry),
  {
    key: "accounts_on_device",
    name: "Accounts on the device in 24 h",
    sentence:
      "How many accounts paid with this device in the 24 hours before; several on one device are unusual.",
    needs: ["deviceId"],
    parts: [
      part(
        "number of accounts on the device in 24 h",
        ({ entities }) => entities.device?.othersIn24h ?? null,
        logScale(1, 20),
        [{ from: 2, to: 6 }],
      ),
    ],
    reading: ([count = 0]) => plural(count, "account"),
  },
  {
    key: "accounts_paying_counterparty",
    name: "Accounts paying the counterparty in 24 h",
    sentence: "How many accounts had a payment with this counterparty in the 24 hours before.",
    needs: ["counterpartyId"],
    parts: [
      part(
        "number of accounts with the counterparty in 24 h",
        ({ entities }) => entities.counterparty?.othersIn24h ?? null,
        logScale(1, 100),
      ),
    ],
    reading: ([count = 0]) => plural(count, "account"),
  },
];
