"use client";
import { parseAsString, useQueryState } from "nuqs";
import { natsToDecibans } from "@/lib/decibans";
import type { CatalogueSignalView } from "@/lib/signals/own-schema";
import { EmptyState } from "../ui/empty-state";
import { Field, Input } from "../ui/field";
import { Decibans } from "../ui/probability";
import { Section } from "../ui/section";
import { Table, Td, Th } from "../ui/table";

/** Signals that every installation has, to be searched by any of their words. */
export function CatalogueSection({ catalogue }: { catalogue: readonly CatalogueSignalView[] }) {
  const [search, setSearch] = useQueryState("search", parseAsString.withDefault(""));
  const words = search.toLowerCase().split(/\s+/).filter(Boolean);
  const found = catalogue.filter((signal) => words.every((word) => textOf(signal).includes(word)));
  return (
    <Section
      title="Catalogue"
      lead="Every signal lies between −1 and 1 by the formula beneath it; several parts let the weight change at set points. A signal whose fields are missing says nothing and is marked so."
    >
      <Field label="Search the catalogue" className="max-w-80 pb-4">
        <Input
          type="search"
          value={search}
          onChange={(event) => void setSearch(event.target.value || null)}
        />
      </Field>
      <p aria-live="polite" className="pb-2 text-small text-soft">
        {words.length === 0
          ? `${catalogue.length} signals`
          : `${found.length} of ${catalogue.length} signals`}
      </p>
      {found.length === 0 ? (
        <EmptyState title="No signal has these words">Search for another one.</EmptyState>
      ) : (
        <ul className="flex flex-col">
          {found.map((signal) => (
            <CatalogueRow key={signal.key} signal={signal} />
          ))}
        </ul>
      )}
    </Section>
  );
}

const textOf = ({ key, name, sentence, needs }: CatalogueSignalView) =>
  [key, name, sentence, ...needs].join(" ").toLowerCase();

function CatalogueRow({ signal }: { signal: CatalogueSignalView }) {
  const { name, sentence, needs, formulas, weights } = signal;
  const largest = weights.reduce((most, weight) => (Math.abs(weight) > Math.abs(most) ? weight : most), 0);
  return (
    <li className="grid gap-x-8 gap-y-1 border-b border-rule py-3 last:border-b-0 lg:grid-cols-[1fr_19rem]">
      <div className="min-w-0">
        <h3 className="font-strong">{name}</h3>
        <p className="max-w-[70ch] text-soft">{sentence}</p>
        <details className="mt-1">
          <summary className="w-fit text-small underline decoration-edge underline-offset-4">
            {formulas.length === 1 ? "Formula and weight" : `${formulas.length} formulas and weights`}
          </summary>
          <Table caption={`Formulas of ${name}`} captionHidden className="mt-2 text-small">
            <thead>
              <tr>
                <Th>Formula</Th>
                <Th numeric>Decibans at 1</Th>
              </tr>
            </thead>
            <tbody>
              {formulas.map((formula, index) => (
                <tr key={formula}>
                  <Td className="font-mono">{formula}</Td>
                  <Td numeric>
                    <Decibans decibans={natsToDecibans(weights[index] ?? 0)} />
                  </Td>
                </tr>
              ))}
            </tbody>
          </Table>
        </details>
      </div>
      <dl className="grid grid-cols-[max-content_1fr] content-start gap-x-4 gap-y-1 text-small">
        <dt className="text-soft">Weight now</dt>
        <dd>
          <Decibans decibans={natsToDecibans(largest)} /> decibans
          {weights.length > 1 ? " in its strongest part" : ""}
        </dd>
        <dt className="text-soft">Needs</dt>
        <dd className="min-w-0 break-words">{needs.length === 0 ? "nothing more" : needs.join(", ")}</dd>
      </dl>
    </li>
  );
}
