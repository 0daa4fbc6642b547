import { decibansToNats, probabilityOf } from "@/lib/decibans";
import { costMinimalProbability, costsOf } from "@/lib/policy/costs";
import { type Projection, project } from "@/lib/policy/projection";
import type { PolicyTerms, ScoreHistogram } from "@/lib/policy/schema";
import { countText } from "../ui/count";
import { percentOf, signedDecibans } from "../ui/probability";
import { RowTh, Table, Td, Th } from "../ui/table";
import { type Currency, minorToText } from "./term-values";

type EffectProps = {
  recent: ScoreHistogram;
  currency: Currency;
  now: PolicyTerms;
  proposed: PolicyTerms;
  before: string;
  /** Tells this table from others of its kind on the screen: "proposal 2". */
  of: string;
};

/** Payments in major units for which it is said from when on stopping them pays. */
const EXAMPLE_AMOUNTS = [100, 1000];

/** What the terms would have made of the recent payments, in force beside proposed. */
export function Effect({ recent, currency, now, proposed, before, of }: EffectProps) {
  const old = project(now, recent);
  const fresh = project(proposed, recent);
  if (!old || !fresh) return <p className="text-soft">Too few recent payments to project the effect from.</p>;
  return (
    <div>
      <Table caption={`Projected effect, ${of}`} captionHidden>
        <thead>
          <tr>
            <Th>Projected effect</Th>
            <Th numeric>{before}</Th>
            <Th numeric>Proposed</Th>
          </tr>
        </thead>
        <tbody>
          <EffectRow name="Cases a day" old={perDay(old.alertsPerDay)} fresh={perDay(fresh.alertsPerDay)} />
          <EffectRow
            name="above the hold line"
            old={perDay(old.holdsPerDay)}
            fresh={perDay(fresh.holdsPerDay)}
          />
          <EffectRow
            name="Review line, decibans"
            old={line(old, "reviewDecibans")}
            fresh={line(fresh, "reviewDecibans")}
          />
          <EffectRow
            name="Hold line, decibans"
            old={line(old, "holdDecibans")}
            fresh={line(fresh, "holdDecibans")}
          />
          {EXAMPLE_AMOUNTS.map((amount) => {
            const minor = amount * 10 ** currency.minorDigits;
            return (
              <EffectRow
                key={amount}
                name={`Stopping ${minorToText(minor, currency.minorDigits)} ${currency.code} pays from`}
                old={paysFrom(now, minor)}
                fresh={paysFrom(proposed, minor)}
              />
            );
          })}
        </tbody>
      </Table>
      <p className="mt-2 text-small text-soft">
        Projected on the {countText(recent.count)} payments of the last 14 days, by their scores at arrival.
        Stopping pays where a legitimate payment stopped costs less than the fraud it prevents.
      </p>
    </div>
  );
}

function EffectRow({ name, old, fresh }: { name: string; old: string; fresh: string }) {
  return (
    <tr>
      <RowTh>{name}</RowTh>
      <Td numeric className="text-soft">
        {old}
      </Td>
      <Td numeric className={old === fresh ? "" : "font-strong"}>
        {fresh}
      </Td>
    </tr>
  );
}

export const perDay = (cases: number): string =>
  cases < 10 ? cases.toFixed(1) : countText(Math.round(cases));

export const probabilityWords = (decibans: number): string =>
  `${percentOf(probabilityOf(decibansToNats(decibans)))} %`;

const line = (projection: Projection, key: "reviewDecibans" | "holdDecibans") =>
  `${signedDecibans(projection[key])} (${probabilityWords(projection[key])})`;

function paysFrom(terms: PolicyTerms, amountMinor: number): string {
  const probability = costMinimalProbability(costsOf(terms, amountMinor));
  return probability === null ? "–" : `${percentOf(probability)} %`;
}
