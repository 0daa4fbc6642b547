import type { Metadata } from "next";
import { Desk } from "@/components/desk/desk";
import { pageContext } from "@/lib/auth/page-context";

export const metadata: Metadata = { title: "Desk" };

export default async function DeskPage() {
  const { actor } = await pageContext("/desk");
  return <Desk personId={actor.personId} />;
}
