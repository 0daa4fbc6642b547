import type { Metadata } from "next";
import { SignalsScreen } from "@/components/signals/signals-screen";
import { mayDo } from "@/lib/auth/demand";
import { pageContext } from "@/lib/auth/page-context";
import { listSignals } from "@/lib/signals/read-signals";

export const metadata: Metadata = { title: "Signals" };

export default async function SignalsPage() {
  const ctx = await pageContext("/signals");
  return <SignalsScreen view={await listSignals(ctx)} mayManage={mayDo(ctx.actor, "scorer.manage")} />;
}
