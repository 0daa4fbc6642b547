import type { ReactNode } from "react";

/** What each figure nearby means, for whoever meets it for the first time; closed until wanted. */
export function HowToRead({ terms }: { terms: readonly { term: string; means: ReactNode }[] }) {
  return (
    <details className="mt-3">
      <summary className="w-fit text-small underline decoration-edge underline-offset-4">
        How to read this
      </summary>
      <dl className="mt-2 grid max-w-[80ch] gap-x-5 gap-y-1.5 text-small sm:grid-cols-[max-content_1fr]">
        {terms.map(({ term, means }) => (
          <div key={term} className="contents">
            <dt className="font-strong not-first:mt-1.5 sm:mt-0">{term}</dt>
            <dd className="text-soft">{means}</dd>
          </div>
        ))}
      </dl>
    </details>
  );
}
