import type { Metadata } from "next";
import { dayEnd, dayStart } from "@/components/trail/day-range";
import { EntryList } from "@/components/trail/entry-list";
import { type TrailFilterFields, TrailFilters } from "@/components/trail/trail-filters";
import { VerifyPanel } from "@/components/trail/verify-panel";
import { Page, PageHead, Section } from "@/components/ui/section";
import { pageContext } from "@/lib/auth/page-context";
import { fieldErrors } from "@/lib/field-errors";
import { TrailInput } from "@/lib/trail/schema";
import { searchTrail } from "@/lib/trail/search";
import { readSearchOptions } from "@/lib/trail/search-options";

export const metadata: Metadata = { title: "Trail" };

type TrailPageProps = { searchParams: Promise<Record<string, string | string[] | undefined>> };

const FIELDS = ["act", "person", "case", "subject", "from", "to"] as const;

export default async function TrailPage({ searchParams }: TrailPageProps) {
  const ctx = await pageContext("/trail");
  const given = await searchParams;
  const fields: TrailFilterFields = Object.fromEntries(
    FIELDS.flatMap((name) => (typeof given[name] === "string" && given[name] ? [[name, given[name]]] : [])),
  );
  const { from, to, ...same } = fields;
  const { timeZone } = ctx.actor;
  const filters = {
    ...same,
    ...(from && { from: dayStart(from, timeZone)?.toISOString() ?? from }),
    ...(to && { to: dayEnd(to, timeZone)?.toISOString() ?? to }),
  };
  const parsed = TrailInput.safeParse(filters);
  const errors = parsed.success
    ? {}
    : Object.fromEntries(fieldErrors(parsed.error).map(({ path, message }) => [path, message]));
  const [options, found] = await Promise.all([
    readSearchOptions(ctx),
    parsed.success ? searchTrail(ctx, parsed.data) : null,
  ]);
  return (
    <Page wide>
      <PageHead
        title="Trail"
        lead="Who did what, and when. Nothing here can be changed; searches are recorded."
      />
      <Section title="Search">
        <TrailFilters fields={fields} options={options} errors={errors} />
      </Section>
      {found && (
        <Section title="Entries">
          <EntryList key={JSON.stringify(filters)} first={found} filters={filters} />
        </Section>
      )}
      <Section
        title="Verification"
        lead="Every entry carries the hash of the one before it. A changed, removed or added entry breaks the chain at its place; an end that was cut off shows only against a head noted outside."
      >
        <VerifyPanel />
      </Section>
    </Page>
  );
}
