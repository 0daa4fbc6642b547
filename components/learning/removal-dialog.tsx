"use client";
import { keepPreviousData, useQuery } from "@tanstack/react-query";
import { useState } from "react";
import type { PersonInfluence, RemovalPreview } from "@/lib/learning/influence-schema";
import { type ApiProblem, api } from "../api";
import { countText } from "../ui/count";
import { Field, Input } from "../ui/field";
import { Notice } from "../ui/notice";
import { Skeleton } from "../ui/skeleton";
import { useZone } from "../ui/time";
import { labelsText } from "./figure-text";
import { ReasonDialog } from "./reason-dialog";
import { windowOf } from "./window";

type RemovalDialogProps = { of: PersonInfluence; onClose: () => void; onDone: () => void };

/** Asks for a person's labels to be taken out, and shows before what that would do. */
export function RemovalDialog({ of: { person }, onClose, onDone }: RemovalDialogProps) {
  const zone = useZone();
  const [days, setDays] = useState({ from: "", to: "" });
  const { unreadable: _, ...span } = windowOf(days, zone);
  const preview = useQuery<RemovalPreview | null, ApiProblem>({
    queryKey: ["learning", "removal", person.id, span.from ?? null, span.to ?? null],
    queryFn: ({ signal }) =>
      api("GET /api/learning/removals/preview", { personId: person.id, ...span }, { signal }),
    placeholderData: keepPreviousData,
  });
  return (
    <ReasonDialog
      title={`Propose to take out labels of ${person.name}?`}
      says="Nothing changes until a second person approves it. Then the log is run again as if these labels had never been given; decisions and what was lived stay as they were."
      hint={`Whoever approves it reads this first. ${person.name} can neither propose nor approve it.`}
      verb="Propose"
      act={(reason) => api("POST /api/learning/removals", { personId: person.id, ...span, reason })}
      onClose={onClose}
      onDone={onDone}
    >
      <div className="flex flex-wrap gap-3">
        <Field label="Given from" className="w-40">
          <Input
            type="date"
            value={days.from}
            onChange={(event) => setDays({ ...days, from: event.target.value })}
          />
        </Field>
        <Field label="To, inclusive" className="w-40">
          <Input
            type="date"
            value={days.to}
            onChange={(event) => setDays({ ...days, to: event.target.value })}
          />
        </Field>
      </div>
      <p className="text-small text-soft">An end left empty takes all.</p>
      <div aria-live="polite" aria-busy={preview.isFetching} className="min-h-16">
        {preview.error ? (
          <Notice kind="error">{preview.error.message}</Notice>
        ) : preview.data ? (
          <p>{previewWords(preview.data)}</p>
        ) : (
          <Skeleton lines={2} className="h-5" />
        )}
      </div>
    </ReasonDialog>
  );
}

function previewWords({ labels, givenBack, effect, payments }: RemovalPreview): string {
  if (labels === 0 || !effect) return "No label of theirs lies within these days.";
  const gone = `${labelsText(labels)} would go${givenBack > 0 ? `; in place of ${countText(givenBack)} of them another person's earlier label would hold again` : ""}.`;
  if (effect.meanDecibans === null || effect.largestDecibans === null) return gone;
  const whose = payments.of === "waiting" ? "waiting" : "newest";
  return `${gone} The scores of ${countText(payments.count)} ${whose} payments would change by ${effect.meanDecibans.toFixed(2)} decibans on average, ${effect.largestDecibans.toFixed(1)} at most.`;
}
