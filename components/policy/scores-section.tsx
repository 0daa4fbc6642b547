import { project } from "@/lib/policy/projection";
import type { PolicyTerms, PolicyView } from "@/lib/policy/schema";
import { countText } from "../ui/count";
import { EmptyState } from "../ui/empty-state";
import { Section } from "../ui/section";
import { type ChartLine, ScoreChart } from "./score-chart";

type ScoresSectionProps = { view: PolicyView; drafted: PolicyTerms | null };

/** Recent scores with the lines in force, and the proposed ones while a proposal is written. */
export function ScoresSection({ view, drafted }: ScoresSectionProps) {
  const { inForce, recent, reviewDecibans, holdDecibans } = view;
  const lines: ChartLine[] = [
    { name: "Review", decibans: reviewDecibans },
    { name: "Hold", decibans: holdDecibans },
  ];
  const now = project(inForce.terms, recent);
  const proposed = drafted && project(drafted, recent);
  if (now && proposed) {
    if (proposed.reviewDecibans !== now.reviewDecibans)
      lines.push({ name: "Review, proposed", decibans: proposed.reviewDecibans, proposed: true });
    if (proposed.holdDecibans !== now.holdDecibans)
      lines.push({ name: "Hold, proposed", decibans: proposed.holdDecibans, proposed: true });
  }
  return (
    <Section
      title="Recent scores"
      lead={
        recent.count > 0
          ? `${countText(recent.count)} payments of the last 14 days, scored as they came in.`
          : undefined
      }
    >
      {recent.count === 0 ? (
        <EmptyState title="No payments in the last 14 days">
          Once payments come in, their scores show here with the two lines on them.
        </EmptyState>
      ) : (
        <ScoreChart recent={recent} lines={lines} />
      )}
    </Section>
  );
}
