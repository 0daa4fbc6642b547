import type { ApprovalView } from "@/lib/approvals/schema";
import { RowTh, Table, Td, Th } from "../ui/table";
import { Time } from "../ui/time";
import { approvalTitle, type SubjectNames } from "./approval-words";

type SettledTableProps = { approvals: readonly ApprovalView[]; names: SubjectNames };

const STATE_WORDS: Readonly<Record<ApprovalView["state"], string>> = {
  waiting: "Waiting",
  approved: "Approved",
  refused: "Refused",
  withdrawn: "Withdrawn",
};

/** What was proposed before and how it ended. */
export function SettledTable({ approvals, names }: SettledTableProps) {
  return (
    <details className="mt-4">
      <summary className="w-fit text-small underline decoration-edge underline-offset-4">
        Decided before ({approvals.length})
      </summary>
      <Table caption="Proposals decided before, newest first" captionHidden className="mt-2">
        <thead>
          <tr>
            <Th>What</Th>
            <Th>Proposed by</Th>
            <Th>Decided</Th>
            <Th>Reasons</Th>
          </tr>
        </thead>
        <tbody>
          {approvals.map((approval) => (
            <tr key={approval.approvalId}>
              <RowTh>{approvalTitle(approval, names)}</RowTh>
              <Td>
                {approval.proposedBy.name}
                <span className="block text-small text-soft">
                  <Time at={approval.proposedAt} />
                </span>
              </Td>
              <Td>
                {STATE_WORDS[approval.state]}
                {approval.settledBy && approval.state !== "withdrawn" && <> by {approval.settledBy.name}</>}
                {approval.settledAt && (
                  <span className="block text-small text-soft">
                    <Time at={approval.settledAt} />
                  </span>
                )}
              </Td>
              <Td className="min-w-56 whitespace-pre-line">
                {approval.reason}
                {approval.settledReason && (
                  <span className="mt-1 block text-small text-soft">Refused: {approval.settledReason}</span>
                )}
              </Td>
            </tr>
          ))}
        </tbody>
      </Table>
    </details>
  );
}
