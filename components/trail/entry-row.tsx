import Link from "next/link";
import type { TrailEntryView } from "@/lib/trail/schema";
import { actWords } from "../act-words";
import { RowTh, Td } from "../ui/table";
import { Time } from "../ui/time";
import { FactList } from "./fact-list";

export function EntryRow({ entry }: { entry: TrailEntryView }) {
  return (
    <tr>
      <RowTh className="figures">{entry.seq}</RowTh>
      <Td>
        <Time at={entry.at} as="second" />
      </Td>
      <Td className="font-strong">{actWords(entry.act)}</Td>
      <Td>
        <Actor actor={entry.actor} />
      </Td>
      <Td>
        <Subject entry={entry} />
      </Td>
      <Td>
        <details>
          <summary className="text-small">Facts</summary>
          <FactList facts={{ ...entry.facts, request: entry.requestId, hash: entry.hash }} />
        </details>
      </Td>
    </tr>
  );
}

const KINDS: Readonly<Record<TrailEntryView["actor"]["kind"], string>> = {
  person: "Somebody",
  key: "Key",
  system: "Cupel",
  anonymous: "A stranger",
};

function Actor({ actor }: { actor: TrailEntryView["actor"] }) {
  if (actor.kind === "person") return actor.name ?? KINDS.person;
  if (actor.kind === "system") return `${KINDS.system}, ${actor.id}`;
  if (actor.kind === "anonymous") return KINDS.anonymous;
  const key = `${KINDS.key} ${actor.name ?? actor.id}`;
  return actor.onBehalfOf ? `${actor.onBehalfOf.name}, by the ${key.toLowerCase()}` : key;
}

/** What the act was done to; a decision opens as it was, anything else leads to all that was done to it. */
function Subject({ entry }: { entry: TrailEntryView }) {
  const { subject } = entry;
  const ofSubject = `/trail?${new URLSearchParams({ subject: `${subject.kind}:${subject.id}` })}`;
  const label = `${subject.kind.replaceAll("_", " ")}${subject.name ? ` ${subject.name}` : ""}`;
  return (
    <span className="flex flex-wrap gap-x-2 gap-y-1">
      {entry.case && (
        <Link href={`/cases/${entry.case.id}`} className="underline">
          case {entry.case.number}
        </Link>
      )}
      {subject.kind === "decision" ? (
        <Link href={`/trail/decisions/${subject.id}`} className="underline">
          decision
        </Link>
      ) : (
        subject.kind !== "case" && (
          <Link href={ofSubject} className="underline" title={subject.id}>
            {label}
          </Link>
        )
      )}
    </span>
  );
}
