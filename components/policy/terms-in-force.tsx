import type { PolicyTerms } from "@/lib/policy/schema";
import { CHANNELS } from "@/lib/transactions/codes";
import { RowTh, Table, Td, Th } from "../ui/table";
import { CHANNEL_WORDS } from "../words";
import { type Currency, leafAt, sayValue, termAt } from "./term-values";
import { TERM_GROUPS } from "./terms";

type TermsProps = { terms: PolicyTerms; currency: Currency };

/** All terms in plain words, by what they are about. */
export function TermsInForce({ terms, currency }: TermsProps) {
  return (
    <div className="flex flex-col gap-6">
      <div className="grid gap-x-8 gap-y-6 md:grid-cols-2 xl:grid-cols-3">
        {TERM_GROUPS.map((group) => (
          <div key={group.title}>
            <h3 className="font-strong">{group.title}</h3>
            <p className="mb-2 text-small text-soft">{group.lead}</p>
            <dl>
              {group.terms
                .map((term) => ({ term, value: leafAt(terms, term.path) }))
                .filter(({ value }) => value !== undefined)
                .map(({ term, value }) => (
                  <div
                    key={term.path}
                    className="flex flex-wrap justify-between gap-x-4 border-b border-rule py-1"
                  >
                    <dt title={term.hint}>{term.label}</dt>
                    <dd className="font-strong tabular-nums">{sayValue(term, value, currency)}</dd>
                  </div>
                ))}
            </dl>
          </div>
        ))}
      </div>
      <ChannelTerms terms={terms} currency={currency} />
    </div>
  );
}

function ChannelTerms({ terms, currency }: TermsProps) {
  const say = (path: string) => sayValue(termAt(path), leafAt(terms, path), currency);
  return (
    <div>
      <h3 className="font-strong">Above the hold line, by channel</h3>
      <p className="mb-2 text-small text-soft">What the payment system is told at once.</p>
      <Table caption="What the sender is told, by channel" captionHidden>
        <thead>
          <tr>
            <Th>Channel</Th>
            <Th>Payment</Th>
            <Th>Held for</Th>
            <Th>When the hold ends undecided</Th>
          </tr>
        </thead>
        <tbody>
          {CHANNELS.map((channel) => {
            const isHeld = terms.channels[channel].onHold === "hold";
            return (
              <tr key={channel}>
                <RowTh>{CHANNEL_WORDS[channel]}</RowTh>
                <Td>{say(`channels.${channel}.onHold`)}</Td>
                <Td>{isHeld ? say(`channels.${channel}.holdMinutes`) : "–"}</Td>
                <Td>{isHeld ? say(`channels.${channel}.atExpiry`) : "–"}</Td>
              </tr>
            );
          })}
        </tbody>
      </Table>
    </div>
  );
}
