"use client";
import type { UseQueryResult } from "@tanstack/react-query";
import { useState } from "react";
import type { InfluenceView, PersonInfluence } from "@/lib/learning/influence-schema";
import type { ApiProblem } from "../api";
import { countText } from "../ui/count";
import { EmptyState } from "../ui/empty-state";
import { HowToRead } from "../ui/how-to-read";
import { Notice } from "../ui/notice";
import { Section } from "../ui/section";
import { Time } from "../ui/time";
import { InfluenceTable } from "./influence-table";
import { LateView } from "./late-view";
import { RemovalDialog } from "./removal-dialog";

type InfluenceSectionProps = {
  query: UseQueryResult<InfluenceView, ApiProblem>;
  personId: string;
  mayManage: boolean;
  onDone: () => void;
};

/** What each person's labels do to the scorer, and the way to take them out. */
export function InfluenceSection({ query, personId, mayManage, onDone }: InfluenceSectionProps) {
  const [removing, setRemoving] = useState<PersonInfluence | null>(null);
  const [said, setSaid] = useState<string | null>(null);
  return (
    <Section
      title="Influence"
      lead="What the scorer in use would be like without each person's labels. A person's labels can be taken out; two people decide that."
    >
      <div aria-live="polite">{said && <Notice className="mb-4">{said}</Notice>}</div>
      <LateView query={query} lines={6}>
        {(view) =>
          view.people.length === 0 ? (
            <EmptyState title="Nobody has given a label yet">
              Once reviewers decide cases, what their verdicts do to the scores stands here.
            </EmptyState>
          ) : (
            <>
              <AsOf view={view} />
              <InfluenceTable
                view={view}
                personId={personId}
                onRemove={
                  mayManage
                    ? (person) => {
                        setSaid(null);
                        setRemoving(person);
                      }
                    : null
                }
              />
              <HowToRead terms={termsOf(view)} />
            </>
          )
        }
      </LateView>
      {removing && (
        <RemovalDialog
          of={removing}
          onClose={() => setRemoving(null)}
          onDone={() => {
            setRemoving(null);
            setSaid("Proposed. It waits above for a second person to approve it.");
            onDone();
          }}
        />
      )}
    </Section>
  );
}

/** How far the effects can be trusted yet. */
function AsOf({ view: { state, computedAt, payments } }: { view: InfluenceView }) {
  const looked = payments && (
    <>
      {" "}
      Scores are those of {countText(payments.count)}{" "}
      {payments.of === "waiting" ? "payments that wait" : "payments, the newest"}.
    </>
  );
  return (
    <p className="mb-2 text-small text-soft">
      {computedAt ? (
        <>
          Reckoned <Time at={computedAt} />
          {state === "pending" && ", and being reckoned anew for the labels since"}.{looked}
        </>
      ) : (
        "The effects are being reckoned in the background."
      )}
    </p>
  );
}

const termsOf = ({ bound, weights }: InfluenceView) => [
  {
    term: "Scores would change",
    means:
      "How far the scores of the payments looked at would lie elsewhere without this person's labels, in decibans: on average, and at most.",
  },
  {
    term: "Weights would move",
    means: `How far the weights would lie from where they are. They are ${weights.length.toFixed(2)} long now, and never longer than ${weights.bound}.`,
  },
  {
    term: "One label",
    means: `moves the weights by ${bound.distance.toFixed(2)} at most, whoever gives it (${bound.formula}).`,
  },
  {
    term: "Corrected, overturned",
    means:
      "Share of the person's labels that another person later corrected, or that an outcome overturned, with its 95 % interval. A large influence with few corrections is experience; with many it deserves a look.",
  },
];
