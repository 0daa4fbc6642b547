import type { Metadata } from "next";
import { Desk } from "@/components/desk/desk";
import { pageContext } from "@/lib/auth/page-context";
import { CaseInput } from "@/lib/cases/schema";

export const metadata: Metadata = { title: "Desk" };

type DeskPageProps = { searchParams: Promise<Record<string, string | string[] | undefined>> };

export default async function DeskPage({ searchParams }: DeskPageProps) {
  const { actor } = await pageContext("/desk");
  const wanted = CaseInput.safeParse({ id: (await searchParams).case });
  return <Desk personId={actor.personId} wantedCaseId={wanted.success ? wanted.data.id : null} />;
}
