"use client";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import type { CaseView, DecisionView } from "@/lib/cases/schema";
import { type Typology, VERDICTS, type Verdict } from "@/lib/decisions/codes";
import { type ApiProblem, api } from "../api";
import { typologiesFor } from "../desk/marker";
import { movedLine } from "../desk/moved-line";
import { ChoiceSet, Radio } from "../ui/choice";
import { Field, Select, TextArea } from "../ui/field";
import { FormDialog } from "../ui/form-dialog";
import { Notice } from "../ui/notice";
import { TYPOLOGY_WORDS, VERDICT_WORDS } from "../words";

type CorrectionDialogProps = {
  view: CaseView;
  standing: DecisionView;
  onClose: () => void;
  onDone: (words: string) => void;
};

/** Another verdict in place of the one that stands, with a reason. The first stays on record. */
export function CorrectionDialog({ view, standing, onClose, onDone }: CorrectionDialogProps) {
  const [verdict, setVerdict] = useState<Verdict>(standing.verdict);
  const [typology, setTypology] = useState<Typology | null>(standing.typology);
  const [reason, setReason] = useState("");
  const correct = useMutation<unknown, ApiProblem>({
    mutationFn: async () => {
      const answer = await api("POST /api/cases/{id}/correction", {
        id: view.caseId,
        verdict,
        typology: verdict === "fraudulent" ? typology : null,
        reason,
      });
      onDone(`The verdict is corrected. ${movedLine(answer?.moved ?? null)}`);
    },
    onSuccess: onClose,
  });
  const { error } = correct;
  const unplaced = error && !error.errorAt("typology") && !error.errorAt("reason");
  return (
    <FormDialog
      title={`Correct the verdict on case ${view.number}`}
      description={`${standing.by.name} found it ${VERDICT_WORDS[standing.verdict].toLowerCase()}. That stays on record; the scorer learns anew from the corrected log.`}
      verb="Correct"
      wayOut="Leave it"
      busy={correct.isPending}
      onSend={() => correct.mutate()}
      onClose={onClose}
    >
      <ChoiceSet legend="Verdict">
        {VERDICTS.map((one) => (
          <Radio
            key={one}
            name="verdict"
            label={VERDICT_WORDS[one]}
            checked={verdict === one}
            onChange={() => setVerdict(one)}
          />
        ))}
      </ChoiceSet>
      {verdict === "fraudulent" && (
        <Field label="Typology" error={error?.errorAt("typology")}>
          <Select
            value={typology ?? ""}
            onChange={(event) =>
              setTypology(
                typologiesFor(view.transaction.channel).find((one) => one === event.target.value) ?? null,
              )
            }
          >
            <option value="">Choose one</option>
            {typologiesFor(view.transaction.channel).map((one) => (
              <option key={one} value={one}>
                {TYPOLOGY_WORDS[one]}
              </option>
            ))}
          </Select>
        </Field>
      )}
      <Field label="Reason" error={error?.errorAt("reason")} required>
        <TextArea value={reason} onChange={(event) => setReason(event.target.value)} maxLength={4000} />
      </Field>
      {unplaced && <Notice kind="error">{error.message}</Notice>}
    </FormDialog>
  );
}
