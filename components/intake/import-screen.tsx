"use client";
import { useQuery } from "@tanstack/react-query";
import type { ImportDetail } from "@/lib/imports/schema";
import { api } from "../api";
import { ButtonLink } from "../ui/button";
import { countText } from "../ui/count";
import { Figure, FigureRow } from "../ui/figure";
import { Notice } from "../ui/notice";
import { Page, PageHead, Section } from "../ui/section";
import { Time } from "../ui/time";
import { ImportStanding } from "./import-standing";
import { isUnfinished, sizeWords } from "./import-words";
import { RowErrors } from "./row-errors";

const EVERY_MS = 1_000;

type ImportScreenProps = { first: ImportDetail; maySeeTrail: boolean };

/** One file: how far it is, what came of it, and which rows did not come in. Followed while it is unfinished. */
export function ImportScreen({ first, maySeeTrail }: ImportScreenProps) {
  const followed = useQuery({
    queryKey: ["imports", "one", first.id],
    queryFn: ({ signal }) =>
      api("GET /api/imports/{id}", { id: first.id }, { signal }) as Promise<ImportDetail>,
    initialData: first,
    refetchInterval: ({ state }) => (state.data && isUnfinished(state.data) ? EVERY_MS : false),
  });
  const view = followed.data;
  const { rowsDone, created, duplicates, rejected, casesOpened } = view;
  return (
    <Page>
      <PageHead
        title={<span className="break-all">{view.fileName}</span>}
        lead={
          <>
            Sent by {view.by ?? "nobody"}, <Time at={view.createdAt} />. Source {view.source},{" "}
            {sizeWords(view.sizeBytes)}.
          </>
        }
      >
        {maySeeTrail && (
          <ButtonLink look="quiet" href={`/trail?subject=import:${view.id}`}>
            In the trail
          </ButtonLink>
        )}
        <ButtonLink href="/intake">All files</ButtonLink>
      </PageHead>
      {followed.error && (
        <Notice kind="error" title="These figures could not be brought up to date" className="mb-4">
          {followed.error.message}
        </Notice>
      )}
      <ImportStanding view={view} />
      <Section title="What came of it">
        <FigureRow>
          <Figure label="Rows read" value={countText(rowsDone)} />
          <Figure label="New payments" value={countText(created)} />
          <Figure label="Known already" value={countText(duplicates)} note="Taken once, not twice" />
          <Figure label="Rejected" value={countText(rejected)} />
          <Figure label="Cases opened" value={countText(casesOpened)} />
        </FigureRow>
      </Section>
      <RowErrors view={view} />
    </Page>
  );
}
