"use client";
import { useState } from "react";
import type { DriftWarning } from "@/lib/learning/drift-schema";
import { api } from "../api";
import { ConfirmDialog } from "../people/confirm-dialog";
import { Button } from "../ui/button";
import { RowTh, Table, Td, Th } from "../ui/table";
import { Time } from "../ui/time";
import { DRIFT_KIND_WORDS, warningWords } from "./drift-words";

type WarningTableProps = { warnings: readonly DriftWarning[]; mayManage: boolean; onSeen: () => void };

/** Every warning with what it rests on; those that nobody has seen can be noted as seen. */
export function WarningTable({ warnings, mayManage, onSeen }: WarningTableProps) {
  const [seeing, setSeeing] = useState<DriftWarning | null>(null);
  return (
    <>
      <Table caption="Warnings of drift, newest first" captionHidden>
        <thead>
          <tr>
            <Th>Raised</Th>
            <Th>What happened</Th>
            <Th>Signals that moved most</Th>
            <Th>Seen</Th>
          </tr>
        </thead>
        <tbody>
          {warnings.map((warning) => (
            <tr key={warning.id}>
              <RowTh>
                <Time at={warning.raisedAt} />
                <span className="block text-small text-soft">{warning.scorerName}</span>
              </RowTh>
              <Td className="min-w-64">
                <span className="font-strong">
                  {warning.seenAt === null && <span aria-hidden="true">▲ </span>}
                  {DRIFT_KIND_WORDS[warning.kind]}
                </span>
                <span className="block">{warningWords(warning)}</span>
              </Td>
              <Td className="min-w-56">
                <MovedSignals warning={warning} />
              </Td>
              <Td>
                {warning.seenAt ? (
                  <>
                    {warning.seenByName}
                    <span className="block text-small text-soft">
                      <Time at={warning.seenAt} />
                    </span>
                  </>
                ) : mayManage ? (
                  <Button small onClick={() => setSeeing(warning)} className="whitespace-nowrap">
                    Note as seen
                  </Button>
                ) : (
                  "Not yet"
                )}
              </Td>
            </tr>
          ))}
        </tbody>
      </Table>
      {seeing && (
        <ConfirmDialog
          title="Note this warning as seen?"
          says="It stays on the list with your name and the time. Watching goes on."
          verb="Note as seen"
          act={() => api("POST /api/learning/drift/{id}/seen", { id: seeing.id })}
          onClose={() => setSeeing(null)}
          onDone={() => {
            setSeeing(null);
            onSeen();
          }}
        />
      )}
    </>
  );
}

function MovedSignals({ warning: { detail } }: { warning: DriftWarning }) {
  if (detail.movedSignals.length === 0) return <span className="text-soft">None beyond chance</span>;
  return (
    <ul>
      {detail.movedSignals.map(({ key, name, shift }) => (
        <li key={key} className="flex justify-between gap-3">
          <span>{name}</span>
          <span className="figures whitespace-nowrap">
            {shift > 0 ? "↑ +" : "↓ −"}
            {Math.abs(shift).toFixed(1)} sd
          </span>
        </li>
      ))}
    </ul>
  );
}
