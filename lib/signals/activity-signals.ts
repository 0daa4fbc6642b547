import { UNIT_MINOR } from "./amount-signals";
import { ENTITY_KINDS, type EntityKind, WINDOWS } from "./facts";
import { type Hinge, logScale } from "./scale";
import { part, plural, roughly, type Signal } from "./signal";

const NEEDED_FIELD: Record<EntityKind, string> = {
  account: "accountId",
  card: "cardRef",
  device: "deviceId",
  counterparty: "counterpartyId",
};

/**
 * Fixed points of the scales by window, 1 h to 30 d. Accounts pay more often than one card or device does; a typical
 * number lies at 0, so that an entity without a past does not stand far out in every window at once.
 */
const TYPICAL_COUNT: Record<EntityKind, readonly number[]> = {
  account: [0, 1, 5, 20],
  card: [0, 0, 2, 8],
  device: [0, 0, 2, 8],
  counterparty: [0, 0, 2, 8],
};
const TYPICAL_VALUE: Record<EntityKind, readonly number[]> = {
  account: [0, 20, 100, 400],
  card: [0, 0, 50, 200],
  device: [0, 0, 50, 200],
  counterparty: [0, 0, 50, 200],
};
const HIGH_COUNT = [20, 60, 300, 1_000];
const HIGH_VALUE = [50_000, 100_000, 500_000, 1_000_000];

/** Only the short windows: bursts are what fraud with a stolen card or account looks like. */
const COUNT_HINGES: Partial<Record<EntityKind, readonly Hinge[]>> = {
  account: [{ from: 3, to: 10 }],
  device: [{ from: 3, to: 10 }],
};

export const activitySignals: readonly Signal[] = ENTITY_KINDS.flatMap((kind) =>
  WINDOWS.map((window, w): Signal => {
    return {
      key: `${kind}_${window.key}`,
      name: `Payments of the ${kind} in ${window.name}`,
      sentence: `How many payments, and what value, the same ${kind} had in the ${window.name} before this one.`,
      needs: [NEEDED_FIELD[kind]],
      parts: [
        part(
          `number of the ${kind}'s payments in ${window.name}`,
          (facts) => facts.entities[kind]?.counts[w] ?? null,
          logScale(TYPICAL_COUNT[kind][w] as number, HIGH_COUNT[w] as number),
          w === 0 ? COUNT_HINGES[kind] : [],
        ),
        part(
          `value of the ${kind}'s payments in ${window.name}`,
          (facts) => {
            const minor = facts.entities[kind]?.valuesMinor[w];
            return minor === undefined ? null : minor / UNIT_MINOR;
          },
          logScale(TYPICAL_VALUE[kind][w] as number, HIGH_VALUE[w] as number),
        ),
      ],
      reading: ([count = 0, value = 0]) => `${plural(count, "payment")}, about ${roughly(value)} in all`,
    };
  }),
);
