"use client";
import { useState } from "react";
import type { ApprovalsView } from "@/lib/approvals/schema";
import type { LearningView, ScorerFigures } from "@/lib/learning/learning-schema";
import { api } from "../api";
import { ConfirmDialog } from "../people/confirm-dialog";
import { Button } from "../ui/button";
import { HowToRead } from "../ui/how-to-read";
import { Notice } from "../ui/notice";
import { Section } from "../ui/section";
import { CandidateDialog } from "./candidate-dialog";
import { FIGURE_TERMS } from "./figure-terms";
import { ReasonDialog } from "./reason-dialog";
import { ScorerTable } from "./scorer-table";
import type { AskedWindow, WindowFields } from "./window";
import { WindowChooser } from "./window-chooser";
import { WindowWords } from "./window-words";

type ScorersSectionProps = {
  view: LearningView;
  approvals: ApprovalsView;
  fields: WindowFields;
  unreadable: AskedWindow["unreadable"];
  /** Figures of another window are on their way. */
  busy: boolean;
  mayManage: boolean;
  onWindow: (fields: WindowFields) => void;
  onDone: () => void;
};

type Asking = { what: "promote" | "drop"; scorer: ScorerFigures } | { what: "add" } | null;

/** The scorer in use and those that run beside it, judged on the same labels. */
export function ScorersSection(props: ScorersSectionProps) {
  const { view, approvals, fields, unreadable, busy, mayManage, onWindow, onDone } = props;
  const [asking, setAsking] = useState<Asking>(null);
  const [said, setSaid] = useState<string | null>(null);
  const candidates = view.scorers.filter(({ role }) => role === "candidate");
  const close = () => setAsking(null);
  const done = (words: string) => {
    close();
    setSaid(words);
    onDone();
  };
  return (
    <Section
      title="Scorers compared"
      lead="Each predicts every label before it learns from it. The figures are over reviewed payments only: what nobody looked at has no label."
      actions={mayManage && <Button onClick={() => setAsking({ what: "add" })}>Run another beside it</Button>}
    >
      <div aria-live="polite">{said && <Notice className="mb-4">{said}</Notice>}</div>
      <WindowChooser fields={fields} unreadable={unreadable} candidates={candidates} onChoose={onWindow} />
      <div aria-busy={busy} className={busy ? "opacity-60 motion-safe:transition-opacity" : undefined}>
        <WindowWords view={view} />
        <ScorerTable
          view={view}
          acts={
            mayManage
              ? {
                  onPromote: (scorer) => setAsking({ what: "promote", scorer }),
                  onDrop: (scorer) => setAsking({ what: "drop", scorer }),
                  promotionWaits: ({ id }) => promotionWaits(approvals, id),
                }
              : null
          }
        />
      </div>
      <HowToRead terms={FIGURE_TERMS} />
      {asking?.what === "add" && (
        <CandidateDialog
          onClose={close}
          onDone={(name) => done(`“${name}” runs beside it now and catches up on the label log by itself.`)}
        />
      )}
      {asking?.what === "promote" && (
        <ReasonDialog
          title={`Propose that “${asking.scorer.name}” gives the scores?`}
          says="Nothing changes until a second person approves it. The scorer in use then goes on beside it."
          hint="Whoever approves it reads this first."
          verb="Propose"
          act={(reason) => api("POST /api/scorers/{id}/promotion", { id: asking.scorer.id, reason })}
          onClose={close}
          onDone={() => done("Proposed. It waits above for a second person to approve it.")}
        />
      )}
      {asking?.what === "drop" && (
        <ConfirmDialog
          title={`Drop “${asking.scorer.name}”?`}
          says="It stops predicting and learning and leaves the comparison. What it would have lost stays on record."
          verb="Drop"
          act={() => api("POST /api/scorers/{id}/drop", { id: asking.scorer.id })}
          onClose={close}
          onDone={() => done(`“${asking.scorer.name}” is dropped.`)}
        />
      )}
    </Section>
  );
}

function promotionWaits({ items }: ApprovalsView, scorerId: string): boolean {
  return items.some(
    ({ state, subject }) => state === "waiting" && "scorerId" in subject && subject.scorerId === scorerId,
  );
}
