import type { Metadata } from "next";
import { CasesScreen } from "@/components/cases/cases-screen";
import { Page, PageHead } from "@/components/ui/section";
import { pageContext } from "@/lib/auth/page-context";

export const metadata: Metadata = { title: "Cases" };

export default async function CasesPage() {
  await pageContext("/cases");
  return (
    <Page wide>
      <PageHead title="Cases" lead="Everything that waits for a verdict, in the policy's order." />
      <CasesScreen />
    </Page>
  );
}
