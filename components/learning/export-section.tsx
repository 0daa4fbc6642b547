import { apiPath } from "../api";
import { ButtonLink } from "../ui/button";
import { Section } from "../ui/section";

/** What leaves this screen: the scorer as a file, and the way to what it reads. */
export function ExportSection() {
  return (
    <Section
      title="Scorecard"
      lead="The scorer in use, frozen, with the definitions of its signals: for a payment system that scores on its own. It does not learn from what is decided afterwards."
    >
      <div className="flex flex-wrap gap-2">
        <a
          download
          href={apiPath("GET /api/scorer/scorecard", {})}
          className="inline-flex min-h-9 items-center rounded-edge border border-edge bg-raised px-3.5 leading-none font-strong hover:border-ink"
        >
          Download the scorecard
        </a>
        <ButtonLink look="quiet" href="/signals">
          Signals and formulas
        </ButtonLink>
      </div>
    </Section>
  );
}
