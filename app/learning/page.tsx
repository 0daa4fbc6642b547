import type { Metadata } from "next";
import { LearningScreen } from "@/components/learning/learning-screen";
import { windowOf } from "@/components/learning/window";
import { listApprovals } from "@/lib/approvals/read";
import { mayDo } from "@/lib/auth/demand";
import { pageContext } from "@/lib/auth/page-context";
import { natsToDecibans } from "@/lib/decibans";
import { readLearning } from "@/lib/learning/compare";
import { policyInForce } from "@/lib/policy/read";
import { thresholdsInForce } from "@/lib/policy/thresholds";

export const metadata: Metadata = { title: "Learning" };

type LearningPageProps = { searchParams: Promise<Record<string, string | string[] | undefined>> };

export default async function LearningPage({ searchParams }: LearningPageProps) {
  const ctx = await pageContext("/learning");
  const { from, to } = await searchParams;
  const { unreadable: _, ...asked } = windowOf({ from: oneOf(from), to: oneOf(to) }, ctx.actor.timeZone);
  const now = ctx.now();
  const [view, approvals, { reviewLogit }] = await Promise.all([
    readLearning(ctx, asked),
    listApprovals(ctx, {}),
    policyInForce(ctx.db, now).then((policy) => thresholdsInForce(ctx.db, policy, now)),
  ]);
  return (
    <LearningScreen
      first={{ view, approvals, asked }}
      reviewDecibans={natsToDecibans(reviewLogit)}
      personId={ctx.actor.personId}
      mayManage={mayDo(ctx.actor, "scorer.manage")}
      maySettle={mayDo(ctx.actor, "approvals.settle")}
    />
  );
}

const oneOf = (value: string | string[] | undefined): string | null =>
  typeof value === "string" ? value : null;
