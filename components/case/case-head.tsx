import type { Ref } from "react";
import type { CaseView } from "@/lib/cases/schema";
import { Amount } from "../ui/amount";
import { Time } from "../ui/time";
import { TimeLeft } from "../ui/time-left";
import { CASE_KIND_WORDS, CHANNEL_WORDS, PAYMENT_STATE_WORDS, ZONE_WORDS } from "../words";

/** Words for the counterparty: its name where the sender gave one. */
function counterpartyOf(transaction: CaseView["transaction"]): string {
  return transaction.counterpartyName ?? transaction.counterpartyId;
}

/** One line that names the case above the balance, where a narrow screen has the heading far below. */
export function CaseLine({ view }: { view: CaseView }) {
  const { transaction } = view;
  return (
    <p aria-hidden="true" className="truncate">
      <span className="mr-1 font-strong">Case {view.number}</span>{" "}
      <Amount amount={transaction.amount} currency={transaction.currency} />{" "}
      {transaction.direction === "incoming" ? "from" : "to"} {counterpartyOf(transaction)}
    </p>
  );
}

type CaseHeadProps = { view: CaseView; headingRef?: Ref<HTMLHeadingElement>; level?: 1 | 2 };

/** Number, amount and parties of the case, and how long there is. The heading takes the focus when the case comes to hand. */
export function CaseHead({ view, headingRef, level = 2 }: CaseHeadProps) {
  const { transaction } = view;
  const Heading = level === 1 ? "h1" : "h2";
  return (
    <div className="-ml-[0.9375rem] border-l-3 border-transparent pl-3 has-focus-visible:border-accent">
      <Heading
        ref={headingRef}
        tabIndex={-1}
        className="flex flex-wrap items-baseline gap-x-3 font-strong text-title outline-none"
      >
        <span>Case {view.number}</span>
        <span className="font-plain text-figure">
          <Amount amount={transaction.amount} currency={transaction.currency} />
        </span>
        <span className="font-plain">
          {transaction.direction === "incoming" ? "from" : "to"} {counterpartyOf(transaction)}
        </span>
      </Heading>
      <p className="flex flex-wrap gap-x-4 text-small text-soft">
        <span>{CHANNEL_WORDS[transaction.channel]}</span>
        <Time at={transaction.occurredAt} />
        <span>{ZONE_WORDS[view.zone]}</span>
        {view.kind !== "alert" && <span>{CASE_KIND_WORDS[view.kind]}</span>}
        <span>
          Payment {PAYMENT_STATE_WORDS[transaction.paymentState].toLowerCase()}
          {transaction.holdExpiresAt && (
            <>
              , <TimeLeft until={transaction.holdExpiresAt} before="hold ends in" after="hold ended" ago />
            </>
          )}
        </span>
        {view.state !== "decided" && view.state !== "lapsed" && (
          <TimeLeft until={view.dueAt} before="Due in" after="Overdue by" />
        )}
      </p>
    </div>
  );
}
