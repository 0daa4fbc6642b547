import type { Metadata } from "next";
import { CaseScreen } from "@/components/cases/case-screen";
import { Page } from "@/components/ui/section";
import { mayDo } from "@/lib/auth/demand";
import { forPage, pageContext } from "@/lib/auth/page-context";
import { caseView } from "@/lib/cases/read";
import { CaseInput } from "@/lib/cases/schema";
import { notFound } from "@/lib/errors";

export const metadata: Metadata = { title: "Case" };

export default async function CasePage({ params }: { params: Promise<{ id: string }> }) {
  const ctx = await pageContext("/cases/[id]");
  const input = CaseInput.safeParse(await params);
  const view = await forPage(
    ctx,
    "/cases/[id]",
    input.success ? caseView(ctx, input.data) : Promise.reject(notFound("This case")),
  );
  return (
    <Page wide>
      <CaseScreen
        initial={view}
        personId={ctx.actor.personId}
        mayWork={mayDo(ctx.actor, "desk.work")}
        mayCorrect={mayDo(ctx.actor, "case.correct")}
        mayAssign={mayDo(ctx.actor, "case.assign")}
      />
    </Page>
  );
}
