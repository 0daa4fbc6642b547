import type { Metadata } from "next";
import { PeopleFilters } from "@/components/people/filters";
import { KeysSection } from "@/components/people/keys-section";
import { inOrder, PEOPLE_ORDERS } from "@/components/people/order";
import { PeopleSection } from "@/components/people/people-section";
import { Page, PageHead } from "@/components/ui/section";
import { mayDo } from "@/lib/auth/demand";
import { pageContext } from "@/lib/auth/page-context";
import { listKeys } from "@/lib/keys/read";
import { listPeople } from "@/lib/people/read";
import { PeopleInput } from "@/lib/people/schema";

export const metadata: Metadata = { title: "People" };

type PeoplePageProps = { searchParams: Promise<Record<string, string | string[] | undefined>> };

export default async function PeoplePage({ searchParams }: PeoplePageProps) {
  const ctx = await pageContext("/people");
  const { sort, ...given } = await searchParams;
  const filled = Object.entries(given).filter(([, value]) => value !== "");
  // An address with filters that make no sense shows everybody, rather than an error.
  const filters = PeopleInput.safeParse(Object.fromEntries(filled)).data ?? {};
  const order = PEOPLE_ORDERS.find((each) => each === sort) ?? "name";
  const [people, everybody, keys] = await Promise.all([
    listPeople(ctx, filters),
    listPeople(ctx, { state: "active" }),
    listKeys(ctx),
  ]);
  const actingPeople = everybody.items
    .filter(({ roles }) => roles.some((role) => role !== "auditor" && role !== "administrator"))
    .map(({ id, name }) => ({ id, name }));
  return (
    <Page>
      <PageHead title="People" lead="Who may sign in, what each may do, and the keys that machines carry." />
      <PeopleFilters filters={filters} />
      <PeopleSection
        people={inOrder(people.items, order)}
        order={order}
        mayManage={mayDo(ctx.actor, "people.manage")}
        isFiltered={filled.length > 0}
      />
      <KeysSection
        keys={keys.items}
        mayManage={mayDo(ctx.actor, "keys.manage")}
        actingPeople={actingPeople}
      />
    </Page>
  );
}
