import type { Metadata } from "next";
import { FloorScreen } from "@/components/floor/floor-screen";
import { pageContext } from "@/lib/auth/page-context";
import { listFloorCases } from "@/lib/floor/list-cases";
import { readFloor } from "@/lib/floor/overview";
import { FloorCasesInput } from "@/lib/floor/schema";

export const metadata: Metadata = { title: "Floor" };

type FloorPageProps = { searchParams: Promise<Record<string, string | string[] | undefined>> };

export default async function FloorPage({ searchParams }: FloorPageProps) {
  const ctx = await pageContext("/floor");
  // An address with filters that make no sense shows everything, rather than an error.
  const input = FloorCasesInput.safeParse(await searchParams).data ?? FloorCasesInput.parse({});
  const [view, list] = await Promise.all([readFloor(ctx), listFloorCases(ctx, input)]);
  return <FloorScreen view={view} list={list} />;
}
