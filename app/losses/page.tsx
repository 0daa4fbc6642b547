import type { Metadata } from "next";
import { LossesScreen } from "@/components/losses/losses-screen";
import { mayDo } from "@/lib/auth/demand";
import { pageContext } from "@/lib/auth/page-context";
import { lastCompleteWeek, readLosses, weeksAround } from "@/lib/losses/losses";
import { LossesInput } from "@/lib/losses/schema";
import { listSummaries, readRecipients } from "@/lib/losses/summaries";

export const metadata: Metadata = { title: "Losses" };

type LossesPageProps = { searchParams: Promise<Record<string, string | string[] | undefined>> };

export default async function LossesPage({ searchParams }: LossesPageProps) {
  const ctx = await pageContext("/losses");
  // An address that names no week shows the last complete one, and says so.
  const asked = LossesInput.safeParse(await searchParams);
  const input = asked.data ?? LossesInput.parse({});
  const week = input.week ?? (await lastCompleteWeek(ctx));
  const mayReadMail = mayDo(ctx.actor, "mail.read");
  const [view, weeks, mail] = await Promise.all([
    readLosses(ctx, { ...input, week }),
    weeksAround(ctx, week),
    mayReadMail ? Promise.all([listSummaries(ctx, { limit: 25 }), readRecipients(ctx)]) : null,
  ]);
  return (
    <LossesScreen
      view={view}
      weeks={weeks}
      badWeek={!asked.success}
      mail={mail && { summaries: mail[0], recipients: mail[1] }}
      mayManage={mayDo(ctx.actor, "summary.manage")}
    />
  );
}
