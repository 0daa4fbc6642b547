import type { Metadata } from "next";
import { PolicyScreen } from "@/components/policy/policy-screen";
import { mayDo } from "@/lib/auth/demand";
import { pageContext } from "@/lib/auth/page-context";
import { readPolicy } from "@/lib/policy/overview";

export const metadata: Metadata = { title: "Policy" };

export default async function PolicyPage() {
  const ctx = await pageContext("/policy");
  return (
    <PolicyScreen
      view={await readPolicy(ctx)}
      personId={ctx.actor.personId}
      mayPropose={mayDo(ctx.actor, "policy.propose")}
      mayApprove={mayDo(ctx.actor, "policy.approve")}
    />
  );
}
