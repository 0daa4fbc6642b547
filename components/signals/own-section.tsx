"use client";
import { useState } from "react";
import type { OwnSignalView, SignalsView } from "@/lib/signals/own-schema";
import { EmptyState } from "../ui/empty-state";
import { Section } from "../ui/section";
import { OwnActDialog } from "./own-act-dialog";
import { type OwnAct, OwnCard } from "./own-card";

type OwnSectionProps = {
  view: SignalsView;
  mayManage: boolean;
  onEdit: (signal: OwnSignalView) => void;
  onDone: (words: string) => void;
};

/** Signals that the team has written itself, and what can be done with each. */
export function OwnSection({ view, mayManage, onEdit, onDone }: OwnSectionProps) {
  const [asked, setAsked] = useState<{ signal: OwnSignalView; act: OwnAct } | null>(null);
  return (
    <Section
      title="The team's own"
      lead={`A formula over a payment's fields. It takes two people to switch one on or off; the scorer then learns every label again, so that the signal counts as if it had always been there, or never. Room for ${view.room} more.`}
    >
      {view.own.length === 0 ? (
        <EmptyState title="The team has no signals of its own">
          {mayManage
            ? "Define one where reviewers keep seeing a sign that the catalogue does not weigh."
            : "A supervisor can define one."}
        </EmptyState>
      ) : (
        <ul className="flex flex-col">
          {view.own.map((signal) => (
            <OwnCard
              key={signal.signalId}
              signal={signal}
              mayManage={mayManage}
              onEdit={() => onEdit(signal)}
              onAct={(act) => setAsked({ signal, act })}
            />
          ))}
        </ul>
      )}
      {asked && (
        <OwnActDialog
          signal={asked.signal}
          act={asked.act}
          onClose={() => setAsked(null)}
          onDone={(words) => {
            setAsked(null);
            onDone(words);
          }}
        />
      )}
    </Section>
  );
}
