import type { Metadata } from "next";
import { ButtonLink } from "@/components/ui/button";
import { Page, PageHead } from "@/components/ui/section";

export const metadata: Metadata = { title: "Nothing here" };

export default function NotFound() {
  return (
    <Page>
      <PageHead
        title="Nothing here"
        lead="No page has this address, or what it showed is not yours to see. Check the link, or start again."
      />
      <ButtonLink href="/">Go to your start page</ButtonLink>
    </Page>
  );
}
