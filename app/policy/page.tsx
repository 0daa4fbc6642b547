import type { Metadata } from "next";
import { PolicyScreen } from "@/components/policy/policy-screen";
import { mayDo } from "@/lib/auth/demand";
import { pageContext } from "@/lib/auth/page-context";
import { showPassed } from "@/lib/learning/show-passed";
import { readPolicy } from "@/lib/policy/overview";

export const metadata: Metadata = { title: "Policy" };

export default async function PolicyPage() {
  const ctx = await pageContext("/policy");
  const [view, passed] = await Promise.all([readPolicy(ctx), showPassed(ctx)]);
  return (
    <PolicyScreen
      view={view}
      passed={passed}
      personId={ctx.actor.personId}
      mayPropose={mayDo(ctx.actor, "policy.propose")}
      mayApprove={mayDo(ctx.actor, "policy.approve")}
    />
  );
}
