import Link from "next/link";
import type { ReactNode } from "react";
import type { DecisionRecordView } from "@/lib/audit/schema";
import { Amount } from "../ui/amount";
import { Time } from "../ui/time";
import {
  CASE_KIND_WORDS,
  CHANNEL_WORDS,
  CONFIDENCE_WORDS,
  DECISION_KIND_WORDS,
  TYPOLOGY_WORDS,
  VERDICT_WORDS,
  ZONE_WORDS,
} from "../words";

/** Who found what, when, on which payment, and what became of it. */
export function DecisionFacts({ record }: { record: DecisionRecordView }) {
  const { decision, transaction } = record;
  const rows: [string, ReactNode][] = [
    [
      "Verdict",
      <strong key="verdict">
        {VERDICT_WORDS[decision.verdict]}, {CONFIDENCE_WORDS[decision.confidence]}
        {decision.typology && ` (${TYPOLOGY_WORDS[decision.typology].toLowerCase()})`}
      </strong>,
    ],
    [DECISION_KIND_WORDS[decision.kind], record.byKey ? `${decision.by.name}, by key` : decision.by.name],
    ["Decided", <Time key="decided" at={decision.decidedAt} as="second" />],
    ["Standing", <Standing key="standing" decision={decision} />],
    ...(decision.reason ? [["Reason", decision.reason] as [string, ReactNode]] : []),
    [
      "Case",
      <span key="case">
        <Link href={`/cases/${record.case.id}`} className="underline">
          {record.case.number}
        </Link>
        , {CASE_KIND_WORDS[record.case.kind].toLowerCase()}, zone {ZONE_WORDS[record.case.zone].toLowerCase()}
      </span>,
    ],
    [
      "Payment",
      <span key="payment">
        <Amount amount={transaction.amount} currency={transaction.currency} />,{" "}
        {CHANNEL_WORDS[transaction.channel].toLowerCase()}, <Time at={transaction.occurredAt} />
      </span>,
    ],
    ["Reference", `${transaction.source} / ${transaction.externalId}`],
    ["Time in hand", `${record.handlingSeconds} s`],
  ];
  return (
    <dl className="grid max-w-3xl grid-cols-[auto_1fr] gap-x-6 gap-y-1.5">
      {rows.map(([name, value]) => (
        <div key={name} className="contents">
          <dt className="text-soft">{name}</dt>
          <dd>{value}</dd>
        </div>
      ))}
    </dl>
  );
}

function Standing({ decision }: { decision: DecisionRecordView["decision"] }) {
  if (decision.undoneAt) {
    return (
      <>
        taken back <Time at={decision.undoneAt} as="second" />
      </>
    );
  }
  return decision.stands ? "stands" : "replaced by a later one";
}
