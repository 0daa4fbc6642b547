"use client";
import Link from "next/link";
import type { EvidenceView, LinkedCase } from "@/lib/cases/schema";
import { Amount } from "../ui/amount";
import { Decibans, Probability } from "../ui/probability";
import { Time } from "../ui/time";
import { CASE_STATE_WORDS, CHANNEL_WORDS, VERDICT_WORDS } from "../words";
import { type LinkGroup, linkGroups } from "./link-groups";

const BY_WORDS: Record<LinkedCase["by"], string> = {
  account: "Same account",
  card: "Same card",
  device: "Same device",
  counterparty: "Same counterparty",
};

type Ticks = { ticked: ReadonlySet<string>; onTick: (transactionId: string, ticked: boolean) => void };

type LinksProps = {
  links: readonly LinkedCase[];
  /** Null while the score is hidden: then no link shows one either. */
  evidence: EvidenceView | null;
  /** Where payments of the account can be decided in the same act. */
  ticks?: Ticks;
  /** Of the headings, one below that of the part this stands in. */
  level?: 3 | 4;
};

/** Other payments of the same account, card, device or counterparty, under the signals that look at them. */
export function Links({ links, evidence, ticks, level = 4 }: LinksProps) {
  const Heading = level === 3 ? "h3" : "h4";
  const groups = linkGroups(links, evidence);
  if (groups.length === 0)
    return <p className="text-soft">Nothing else shares an account, card, device or counterparty with it.</p>;
  return groups.map((group) => (
    <section key={group.by} aria-label={BY_WORDS[group.by]} className="mb-4 last:mb-0">
      <div className="mb-1 flex flex-wrap items-baseline gap-x-3 text-small">
        <Heading className="font-strong">{BY_WORDS[group.by]}</Heading>
        {group.signals.slice(0, 3).map((signal) => (
          <span key={signal.key} className="text-soft">
            {signal.name} <Decibans decibans={signal.decibans} />
          </span>
        ))}
      </div>
      <LinkTable group={group} showScore={evidence !== null} {...(ticks && { ticks })} />
    </section>
  ));
}

function LinkTable({ group, showScore, ticks }: { group: LinkGroup; showScore: boolean; ticks?: Ticks }) {
  return (
    <section
      // Room at the sides for the ring of what has the focus, which scrolling would cut.
      className="-mx-1 overflow-x-auto px-1"
      aria-label={`${BY_WORDS[group.by]}, payments`}
      // biome-ignore lint/a11y/noNoninteractiveTabindex: what scrolls must be reachable by keyboard (WCAG 2.1.1)
      tabIndex={0}
    >
      <table className="w-full table-fixed text-left text-small">
        <caption className="sr-only">{BY_WORDS[group.by]}</caption>
        <colgroup>
          {ticks && <col className="w-7" />}
          <col className="w-22 sm:w-32" />
          <col className="sm:w-28" />
          <col className="w-28 sm:w-40" />
          <col className="max-sm:hidden" />
          <col className="max-sm:hidden" />
          {showScore && <col className="w-20 max-sm:hidden" />}
        </colgroup>
        <thead className="sr-only">
          <tr>
            {ticks && <th scope="col">Decide together</th>}
            <th scope="col">Case</th>
            <th scope="col">
              Time<span className="sm:hidden"> and finding</span>
            </th>
            <th scope="col">Amount</th>
            <th scope="col" className="max-sm:hidden">
              Channel
            </th>
            <th scope="col" className="max-sm:hidden">
              Finding
            </th>
            {showScore && (
              <th scope="col" className="max-sm:hidden">
                Fraud, %
              </th>
            )}
          </tr>
        </thead>
        <tbody>
          {group.links.map((link) => (
            <LinkRow key={link.transactionId} link={link} showScore={showScore} {...(ticks && { ticks })} />
          ))}
        </tbody>
      </table>
    </section>
  );
}

function LinkRow({ link, showScore, ticks }: { link: LinkedCase; showScore: boolean; ticks?: Ticks }) {
  const decidable =
    link.together && link.verdict === null && link.state !== "decided" && link.state !== "lapsed";
  const name = link.number === null ? link.externalId : `Case ${link.number}`;
  return (
    <tr className="border-t border-rule">
      {ticks && (
        <td className="w-7 py-1">
          {decidable && (
            <input
              type="checkbox"
              aria-label={`Decide ${name} together with this case`}
              checked={ticks.ticked.has(link.transactionId)}
              onChange={(event) => ticks.onTick(link.transactionId, event.target.checked)}
              className="block size-4.5 accent-accent"
            />
          )}
        </td>
      )}
      <th scope="row" className="py-1 pr-3 font-plain">
        {link.caseId ? (
          <Link href={`/cases/${link.caseId}`} className="underline decoration-edge underline-offset-2">
            {name}
          </Link>
        ) : (
          <span className="figures text-soft">{name}</span>
        )}
      </th>
      <td className="py-1 pr-3">
        <Time at={link.occurredAt} as="short" />
        {/* A narrow screen has no room for a column of it. */}
        <span className="block sm:hidden">{findingOf(link)}</span>
      </td>
      <td className="py-1 text-right sm:pr-3">
        <Amount amount={link.amount} currency={link.currency} aligned />
      </td>
      <td className="py-1 pr-3 max-sm:hidden">{CHANNEL_WORDS[link.channel]}</td>
      <td className="py-1 pr-3 max-sm:hidden">{findingOf(link)}</td>
      {showScore && (
        <td className="py-1 text-right max-sm:hidden">
          <span title="Score when it was last taken">
            {link.probability === null ? "hidden" : <Probability probability={link.probability} />}
          </span>
        </td>
      )}
    </tr>
  );
}

function findingOf(link: LinkedCase) {
  if (link.verdict === "fraudulent") {
    return <span className="font-strong text-ochre-ink">{VERDICT_WORDS.fraudulent}</span>;
  }
  if (link.verdict !== null) return <span className="text-verdigris-ink">{VERDICT_WORDS[link.verdict]}</span>;
  return (
    <span className="text-soft">
      {link.state === null ? "Passed, no case" : CASE_STATE_WORDS[link.state]}
    </span>
  );
}
