import type { CaseView } from "@/lib/cases/schema";
import { actWords } from "../act-words";
import { Time } from "../ui/time";

/** What happened to the case, newest first. */
export function Timeline({ entries }: { entries: CaseView["timeline"] }) {
  const newestFirst = entries.toSorted((a, b) => b.at.localeCompare(a.at));
  return (
    <ol className="border-l border-edge pl-3 text-small">
      {newestFirst.map((entry, index) => (
        // biome-ignore lint/suspicious/noArrayIndexKey: two acts can share moment and name
        <li key={`${entry.at}-${entry.act}-${index}`} className="relative pb-2 last:pb-0">
          <span
            aria-hidden="true"
            className="absolute top-1.75 -left-[0.9375rem] size-1.25 rounded-full bg-edge"
          />
          <span className="font-strong">{actWords(entry.act)}</span>
          {entry.detail && <span>, {entry.detail}</span>}
          <span className="block text-soft">
            <Time at={entry.at} as="short" /> by {entry.by}
          </span>
        </li>
      ))}
    </ol>
  );
}
