import type { Metadata } from "next";
import { UnsubscribeForm } from "@/components/losses/unsubscribe-form";
import { Page, PageHead } from "@/components/ui/section";

export const metadata: Metadata = { title: "Weekly summaries", referrer: "no-referrer" };

type UnsubscribePageProps = { params: Promise<{ token: string }> };

/** Opening it changes nothing: mail programs and their guards open every address they see. */
export default async function UnsubscribePage({ params }: UnsubscribePageProps) {
  const { token } = await params;
  return (
    <Page>
      <PageHead title="Weekly summaries" lead="They come because a risk manager put you on the list." />
      <UnsubscribeForm token={token} />
    </Page>
  );
}
