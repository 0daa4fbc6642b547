"use client";
import { useRouter } from "next/navigation";
import { useEffect, useState } from "react";
import type { FloorCasesView, FloorView } from "@/lib/floor/schema";
import { Button } from "../ui/button";
import { EmptyState } from "../ui/empty-state";
import { Notice } from "../ui/notice";
import { Page, PageHead, Section } from "../ui/section";
import { Time } from "../ui/time";
import { CHANNEL_WORDS, ZONE_WORDS } from "../words";
import { CasesSection } from "./cases-section";
import { FloorFigures } from "./floor-figures";
import { PeopleTable } from "./people-table";
import { WhereTable } from "./where-table";

type FloorScreenProps = { view: FloorView; list: FloorCasesView };

const REFRESH_MS = 30_000;

export function FloorScreen({ view, list }: FloorScreenProps) {
  const router = useRouter();
  const [said, setSaid] = useState<string | null>(null);
  useEffect(() => {
    const timer = setInterval(() => {
      if (document.visibilityState === "visible") router.refresh();
    }, REFRESH_MS);
    return () => clearInterval(timer);
  }, [router]);
  const done = (words: string) => {
    setSaid(words);
    router.refresh();
  };
  const zones = view.byZone.map((row) => ({ ...row, code: row.zone, name: ZONE_WORDS[row.zone] }));
  const channels = view.byChannel
    .filter(({ total }) => total > 0)
    .map((row) => ({ ...row, code: row.channel, name: CHANNEL_WORDS[row.channel] }));
  return (
    <Page wide>
      <PageHead
        title="Floor"
        lead={
          <>
            What waits, where, and with whom. As of <Time at={view.at} as="clock" />.
          </>
        }
      >
        <Button onClick={() => router.refresh()}>Refresh</Button>
      </PageHead>
      <FloorFigures view={view} />
      <div aria-live="polite">{said && <Notice className="mb-5">{said}</Notice>}</div>
      <Section title="People" lead="Everybody who decides cases, and today's verdicts since midnight.">
        {view.people.length === 0 ? (
          <EmptyState title="Nobody decides cases yet">
            An administrator adds reviewers and supervisors under People.
          </EmptyState>
        ) : (
          <PeopleTable people={view.people} onDone={done} />
        )}
      </Section>
      <Section title="Where it waits">
        <div className="grid items-start gap-x-10 gap-y-5 lg:grid-cols-2">
          <WhereTable by="zone" title="Zone" rows={zones} />
          {channels.length > 0 && <WhereTable by="channel" title="Channel" rows={channels} />}
        </div>
      </Section>
      <CasesSection list={list} people={view.people} onDone={done} />
    </Page>
  );
}
