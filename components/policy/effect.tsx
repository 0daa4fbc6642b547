import { decibansToNats, probabilityOf } from "@/lib/decibans";
import { type Projection, project } from "@/lib/policy/projection";
import type { PolicyTerms, ScoreHistogram } from "@/lib/policy/schema";
import { percentOf, signedDecibans } from "../ui/probability";
import { RowTh, Table, Td, Th } from "../ui/table";

export type Lines = Pick<PolicyTerms, "reviewThreshold" | "holdThreshold">;

type EffectProps = { recent: ScoreHistogram; now: Lines; proposed: Lines; before: string };

/** What the lines would have made of the recent payments, in force beside proposed. */
export function Effect({ recent, now, proposed, before }: EffectProps) {
  const old = project(now, recent);
  const fresh = project(proposed, recent);
  if (!old || !fresh) return <p className="text-soft">Too few recent payments to project the effect from.</p>;
  return (
    <Table
      caption={`Projected on the ${recent.count} payments of the last 14 days, by their scores at arrival`}
    >
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
          name="of them held or refused"
          old={perDay(old.holdsPerDay)}
          fresh={perDay(fresh.holdsPerDay)}
        />
        <EffectRow
          name="Review line"
          old={line(old, "reviewDecibans")}
          fresh={line(fresh, "reviewDecibans")}
        />
        <EffectRow name="Hold line" old={line(old, "holdDecibans")} fresh={line(fresh, "holdDecibans")} />
      </tbody>
    </Table>
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

export const perDay = (cases: number): string => (cases < 10 ? cases.toFixed(1) : String(Math.round(cases)));

export const probabilityWords = (decibans: number): string =>
  `${percentOf(probabilityOf(decibansToNats(decibans)))} %`;

const line = (projection: Projection, key: "reviewDecibans" | "holdDecibans") =>
  `${signedDecibans(projection[key])} decibans, ${probabilityWords(projection[key])}`;
