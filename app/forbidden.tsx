import type { Metadata } from "next";
import { ButtonLink } from "@/components/ui/button";
import { Page, PageHead } from "@/components/ui/section";

export const metadata: Metadata = { title: "Not among your roles" };

export default function Forbidden() {
  return (
    <Page>
      <PageHead
        title="Not among your roles"
        lead="Your roles do not open this page. An administrator can change what you may do."
      />
      <ButtonLink href="/">Go to your start page</ButtonLink>
    </Page>
  );
}
