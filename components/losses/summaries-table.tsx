import type { SummaryItem } from "@/lib/losses/summary-schema";
import { Button } from "../ui/button";
import { RowTh, Table, Td, Th } from "../ui/table";
import { Time } from "../ui/time";

type SummariesTableProps = {
  items: readonly SummaryItem[];
  mayManage: boolean;
  onShow: (item: SummaryItem) => void;
  onSendAgain: (item: SummaryItem) => void;
  onMarkAsSent: (item: SummaryItem) => void;
};

const STATE_WORDS: Readonly<Record<SummaryItem["state"], string>> = {
  queued: "Waiting to be sent",
  sending: "Being sent",
  sent: "Sent",
  failed: "Failed",
  uncertain: "Uncertain: it may have arrived",
};

const KIND_WORDS: Readonly<Record<SummaryItem["kind"], string>> = {
  weekly_summary: "Weekly summary",
  case_assigned: "Case assigned",
  approval_wanted: "Approval wanted",
  deadline_digest: "Deadlines passed",
};

export function SummariesTable({ items, mayManage, onShow, onSendAgain, onMarkAsSent }: SummariesTableProps) {
  return (
    <Table caption="Weekly summaries, newest first" captionHidden>
      <thead>
        <tr>
          <Th>Week or mail</Th>
          <Th>To</Th>
          <Th>State</Th>
          <Th>What to do</Th>
        </tr>
      </thead>
      <tbody>
        {items.map((item) => (
          <tr key={item.id}>
            <RowTh className="whitespace-nowrap">
              {item.week ? <span className="figures">{item.week}</span> : KIND_WORDS[item.kind]}
            </RowTh>
            <Td>{item.person.name}</Td>
            <Td>
              <Standing item={item} />
            </Td>
            <Td>
              <span className="flex flex-wrap gap-2">
                {item.kind === "weekly_summary" && (
                  <Button small onClick={() => onShow(item)}>
                    Show
                  </Button>
                )}
                {mayManage && (item.state === "uncertain" || item.state === "failed") && (
                  <Button small onClick={() => onSendAgain(item)}>
                    Send again
                  </Button>
                )}
                {mayManage && item.state === "uncertain" && (
                  <Button small onClick={() => onMarkAsSent(item)}>
                    Mark as sent
                  </Button>
                )}
              </span>
            </Td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

function Standing({ item }: { item: SummaryItem }) {
  const needsSomebody = item.state === "failed" || item.state === "uncertain";
  return (
    <>
      <span className={needsSomebody ? "font-strong text-error" : ""}>
        {needsSomebody && <span aria-hidden="true">✕ </span>}
        {STATE_WORDS[item.state]}
      </span>
      <span className="block text-small text-soft">
        {item.sentAt && <Time at={item.sentAt} />}
        {item.nextAttemptAt && item.attempts > 0 && (
          <>
            tried {item.attempts === 1 ? "once" : `${item.attempts} times`}, next at{" "}
            <Time at={item.nextAttemptAt} />
          </>
        )}
        {item.problem && <span className="block">{item.problem}</span>}
      </span>
    </>
  );
}
