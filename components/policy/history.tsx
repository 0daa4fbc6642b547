import { termChanges } from "@/lib/policy/changes";
import type { PolicyState } from "@/lib/policy/codes";
import type { PolicyRecord, PolicyView } from "@/lib/policy/schema";
import { Button } from "../ui/button";
import { RowTh, Table, Td, Th } from "../ui/table";
import { Time } from "../ui/time";
import { ChangesTable } from "./changes-table";

type HistoryProps = { view: PolicyView; onProposeAgain: ((record: PolicyRecord) => void) | null };

const STATE_WORDS: Readonly<Record<PolicyState, string>> = {
  proposed: "Proposed",
  approved: "Approved",
  declined: "Declined",
  withdrawn: "Withdrawn",
};

/** Everything that was settled: who, when, why, and what it changed. */
export function PolicyHistory({ view, onProposeAgain }: HistoryProps) {
  const byVersion = new Map(view.history.map((record) => [record.version, record]));
  return (
    <Table caption="Versions and proposals, newest first" captionHidden>
      <thead>
        <tr>
          <Th>Version</Th>
          <Th>Settled</Th>
          <Th>Proposed by</Th>
          <Th>In force from</Th>
          <Th>Reason and changes</Th>
          {onProposeAgain && <Th>Put back</Th>}
        </tr>
      </thead>
      <tbody>
        {view.history.map((record) => (
          <tr key={record.policyId}>
            <RowTh>
              {record.version ?? "–"}
              {record.version === view.inForce.version && <span className="block text-small">in force</span>}
            </RowTh>
            <Td>
              {STATE_WORDS[record.state]}
              <span className="block text-small text-soft">
                {record.settledBy?.name ?? "the system"}
                {record.settledAt && (
                  <>
                    {", "}
                    <Time at={record.settledAt} />
                  </>
                )}
              </span>
            </Td>
            <Td>{record.proposedBy?.name ?? "the system"}</Td>
            <Td>{record.effectiveAt ? <Time at={record.effectiveAt} /> : "–"}</Td>
            <Td className="min-w-56">
              <p className="whitespace-pre-line">{record.reason}</p>
              {record.refusalReason !== null && (
                <p className="mt-1 whitespace-pre-line">
                  <span className="font-strong">Declined because</span> {record.refusalReason}
                </p>
              )}
              <Changes record={record} base={byVersion.get(record.basedOnVersion)} view={view} />
            </Td>
            {onProposeAgain && (
              <Td>
                {record.version !== view.newestVersion && (
                  <Button small onClick={() => onProposeAgain(record)}>
                    Propose these again
                  </Button>
                )}
              </Td>
            )}
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

type ChangesProps = { record: PolicyRecord; base: PolicyRecord | undefined; view: PolicyView };

function Changes({ record, base, view }: ChangesProps) {
  if (!base || record.basedOnVersion === null) return null;
  const changes = termChanges(base.terms, record.terms);
  return (
    <details className="mt-1 text-small">
      <summary className="w-fit underline decoration-edge underline-offset-4">
        {changes.length === 1 ? "1 term" : `${changes.length} terms`} against version {base.version}
      </summary>
      <ChangesTable
        changes={changes}
        currency={view.baseCurrency}
        before={`Version ${base.version}`}
        of={record.version === null ? `proposal of ${record.proposedAt}` : `version ${record.version}`}
        after={record.version === null ? "Proposed" : `Version ${record.version}`}
      />
    </details>
  );
}
