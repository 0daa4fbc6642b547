"use client";
import { useRouter, useSearchParams } from "next/navigation";
import { useState } from "react";
import type { PersonView } from "@/lib/people/schema";
import { api } from "../api";
import { Button } from "../ui/button";
import { EmptyState } from "../ui/empty-state";
import { Section } from "../ui/section";
import { SortableTh, Table, Th } from "../ui/table";
import { AddPersonDialog } from "./add-person-dialog";
import { ConfirmDialog } from "./confirm-dialog";
import type { PeopleOrder } from "./order";
import { PersonRow, type PersonTask } from "./person-row";
import { RolesDialog } from "./roles-dialog";
import { ShownOnce } from "./shown-once";

type Open = { task: PersonTask; person: PersonView } | { task: "add" } | null;
type Shown = { name: string; secret: string } | null;

type PeopleSectionProps = {
  people: readonly PersonView[];
  order: PeopleOrder;
  mayManage: boolean;
  isFiltered: boolean;
};

export function PeopleSection({ people, order, mayManage, isFiltered }: PeopleSectionProps) {
  const router = useRouter();
  const [open, setOpen] = useState<Open>(null);
  const [shown, setShown] = useState<Shown>(null);
  const close = () => setOpen(null);
  const done = () => {
    close();
    router.refresh();
  };
  const doneWith = (answer: { person: PersonView; oneTimePassword: string | null } | null) => {
    done();
    if (answer?.oneTimePassword) setShown({ name: answer.person.name, secret: answer.oneTimePassword });
  };
  return (
    <Section
      title="Accounts"
      lead="A change of roles, password or state ends the person's sessions at once."
      actions={mayManage && <Button onClick={() => setOpen({ task: "add" })}>Add a person</Button>}
    >
      {people.length === 0 ? (
        <EmptyState title="Nobody found">
          {isFiltered ? "No account fits these filters." : "There are no accounts yet."}
        </EmptyState>
      ) : (
        <Table caption="People and their roles" captionHidden>
          <thead>
            <tr>
              <OrderTh name="Name" order="name" current={order} />
              <Th>Roles</Th>
              <Th>Account</Th>
              <OrderTh name="Last sign-in" order="last_sign_in" current={order} />
              {mayManage && <Th>Change</Th>}
            </tr>
          </thead>
          <tbody>
            {people.map((person) => (
              <PersonRow
                key={person.id}
                person={person}
                onTask={mayManage ? (task) => setOpen({ task, person }) : null}
              />
            ))}
          </tbody>
        </Table>
      )}
      {open?.task === "add" && <AddPersonDialog onClose={close} onDone={doneWith} />}
      {open?.task === "roles" && <RolesDialog person={open.person} onClose={close} onDone={done} />}
      {open?.task === "reset" && (
        <ConfirmDialog
          act={() => api("POST /api/people/{id}/password-reset", { id: open.person.id })}
          title={`Reset ${open.person.name}'s password?`}
          says="The password stops working at once, sessions end, and you get a one-time password to hand over."
          verb="Reset the password"
          onClose={close}
          onDone={doneWith}
        />
      )}
      {open?.task === "deactivate" && (
        <ConfirmDialog
          act={() => api("POST /api/people/{id}/deactivate", { id: open.person.id })}
          title={`Deactivate ${open.person.name}?`}
          says="Nobody can sign in with this account any more, and keys that act for it stop working. What the person did stays."
          verb="Deactivate"
          onClose={close}
          onDone={done}
        />
      )}
      {open?.task === "reactivate" && (
        <ConfirmDialog
          act={() => api("POST /api/people/{id}/reactivate", { id: open.person.id })}
          title={`Reactivate ${open.person.name}?`}
          says="The account opens again with the roles and the password it had."
          verb="Reactivate"
          onClose={close}
          onDone={done}
        />
      )}
      <ShownOnce
        title="One-time password"
        says={shown && `Hand this to ${shown.name}. It is used up when they choose a password of their own.`}
        secret={shown?.secret ?? null}
        onClose={() => setShown(null)}
      />
    </Section>
  );
}

type OrderThProps = { name: string; order: PeopleOrder; current: PeopleOrder };

function OrderTh({ name, order, current }: OrderThProps) {
  const query = new URLSearchParams(useSearchParams());
  query.set("sort", order);
  return (
    <SortableTh sorted={order === current ? "ascending" : "none"} href={`/people?${query}`}>
      {name}
    </SortableTh>
  );
}
