"use client";
import Link from "next/link";
import { useState } from "react";
import type { FloorPerson } from "@/lib/floor/schema";
import { api } from "../api";
import { ConfirmDialog } from "../people/confirm-dialog";
import { Button } from "../ui/button";
import { RowTh, Table, Td, Th } from "../ui/table";

type PeopleTableProps = { people: readonly FloorPerson[]; onDone: (said: string) => void };

/** Who holds what; a person's claims can be taken back, at the end of a shift or when somebody falls ill. */
export function PeopleTable({ people, onDone }: PeopleTableProps) {
  const [releasing, setReleasing] = useState<FloorPerson | null>(null);
  return (
    <>
      <Table caption="Cases by person" captionHidden>
        <thead>
          <tr>
            <Th>Person</Th>
            <Th numeric>In hand</Th>
            <Th numeric>Assigned</Th>
            <Th numeric>Overdue among them</Th>
            <Th numeric>Decided today</Th>
            <Th>Claims</Th>
          </tr>
        </thead>
        <tbody>
          {people.map((person) => (
            <tr key={person.id}>
              <RowTh>
                <Link
                  href={`/floor?person=${person.id}`}
                  scroll={false}
                  className="underline decoration-edge underline-offset-4 hover:decoration-ink"
                >
                  {person.name}
                </Link>
              </RowTh>
              <Td numeric>{person.claimed}</Td>
              <Td numeric>{person.assigned}</Td>
              <Td numeric>{person.overdue}</Td>
              <Td numeric>{person.decidedToday}</Td>
              <Td>
                {person.claimed > 0 && (
                  <Button small className="whitespace-nowrap" onClick={() => setReleasing(person)}>
                    Take back
                  </Button>
                )}
              </Td>
            </tr>
          ))}
        </tbody>
      </Table>
      {releasing && (
        <ConfirmDialog
          title={`Take back what ${releasing.name} holds?`}
          says="The cases in hand go back to the queue, or to the supervisors where they were escalated. Half-written notes are kept; assignments stay."
          verb="Take back"
          act={() => api("POST /api/floor/release", { personId: releasing.id })}
          onClose={() => setReleasing(null)}
          onDone={(answer) => {
            setReleasing(null);
            onDone(`${cases(answer?.changed.length ?? 0)} taken back from ${releasing.name}.`);
          }}
        />
      )}
    </>
  );
}

export const cases = (count: number): string => (count === 1 ? "1 case" : `${count} cases`);
