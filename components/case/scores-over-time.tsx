"use client";
import { useQuery } from "@tanstack/react-query";
import type { ScoresView } from "@/lib/audit/schema";
import { api } from "../api";
import { Notice } from "../ui/notice";
import { percentOf, signedDecibans } from "../ui/probability";
import { Skeleton } from "../ui/skeleton";
import { Time } from "../ui/time";
import { DECISION_KIND_WORDS } from "../words";
import { DeriveAgain } from "./derive-again";

type Item = ScoresView["items"][number];

type ScoresOverTimeProps = { caseId: string };

/** Every score the payment was given, by which scorer and under which policy, each to be derived again. */
export function ScoresOverTime({ caseId }: ScoresOverTimeProps) {
  const { data, error } = useQuery({
    queryKey: ["case", caseId, "scores"],
    queryFn: ({ signal }) =>
      api("GET /api/cases/{id}/scores", { id: caseId }, { signal }) as Promise<ScoresView>,
  });
  if (error) return <Notice kind="error" title={error.message} />;
  if (!data) return <Skeleton lines={3} className="max-w-2xl" />;
  if (data.hidden) return <p className="text-soft">The policy hides the score until the verdict is given.</p>;
  return (
    <>
      {data.leftOut > 0 && (
        <p className="mb-2 text-small text-soft">
          {data.leftOut} older {data.leftOut === 1 ? "score is" : "scores are"} not listed.
        </p>
      )}
      <ol className="flex flex-col">
        {data.items.map((item) => (
          <li key={item.scoreId} className="border-rule border-b py-2 last:border-b-0">
            <Score caseId={caseId} item={item} />
          </li>
        ))}
      </ol>
    </>
  );
}

function Score({ caseId, item }: { caseId: string; item: Item }) {
  return (
    <div className="grid gap-x-6 gap-y-1 sm:grid-cols-[11rem_minmax(0,16rem)_minmax(0,1fr)] lg:grid-cols-[11rem_minmax(0,16rem)_14rem_minmax(0,1fr)]">
      <Time at={item.at} as="second" />
      <span className="font-strong">{whatWords(item)}</span>
      <span className="whitespace-nowrap">
        <span className="figures">{signedDecibans(item.totalDecibans)}</span>
        <span className="text-soft"> decibans, </span>
        <span className="figures">{percentOf(item.probability)}</span>
        <span className="text-soft">{"\u202f"}%</span>
      </span>
      <span className="text-small text-soft sm:col-span-3 lg:col-span-1">
        {item.scorer ? `${item.scorer.name}, version ${item.scorer.version}` : "No scorer of ours"}; policy
        version {item.policyVersion}
      </span>
      {item.derivable && (
        <div className="sm:col-span-3 lg:col-span-4">
          <DeriveAgain caseId={caseId} scoreId={item.scoreId} what={whatWords(item)} />
        </div>
      )}
    </div>
  );
}

function whatWords({ kind, decision }: Item): string {
  if (decision) return `${DECISION_KIND_WORDS[decision.kind]} by ${decision.by}`;
  return kind === "arrival" ? "At arrival" : "After a linked payment was labelled";
}
