import type { PersonView } from "@/lib/people/schema";
import { Button } from "../ui/button";
import { RowTh, Td } from "../ui/table";
import { Time } from "../ui/time";
import { ROLE_WORDS } from "../words";

export type PersonTask = "roles" | "reset" | "deactivate" | "reactivate";

type PersonRowProps = {
  person: PersonView;
  /** Null for those who may only read. */
  onTask: ((task: PersonTask) => void) | null;
};

export function PersonRow({ person, onTask }: PersonRowProps) {
  const isActive = person.state === "active";
  return (
    <tr className={isActive ? "" : "text-soft"}>
      <RowTh>
        <span className="block">{person.name}</span>
        <span className="block text-small text-soft">{person.email}</span>
      </RowTh>
      <Td>{person.roles.map((role) => ROLE_WORDS[role]).join(", ") || "none"}</Td>
      <Td>
        <AccountState person={person} />
      </Td>
      <Td>{person.lastSignInAt ? <Time at={person.lastSignInAt} /> : "never"}</Td>
      {onTask && (
        <Td>
          <div className="flex gap-1.5 whitespace-nowrap">
            <Task name="Roles" of={person.name} onPress={() => onTask("roles")} />
            <Task name="Reset password" of={person.name} onPress={() => onTask("reset")} />
            {isActive ? (
              <Task name="Deactivate" of={person.name} onPress={() => onTask("deactivate")} />
            ) : (
              <Task name="Reactivate" of={person.name} onPress={() => onTask("reactivate")} />
            )}
          </div>
        </Td>
      )}
    </tr>
  );
}

function AccountState({ person }: { person: PersonView }) {
  if (person.state === "deactivated") return "Deactivated";
  if (person.lockedUntil) {
    return (
      <>
        Locked until <Time at={person.lockedUntil} as="short" />
      </>
    );
  }
  return person.passwordIsOneTime ? "Active, one-time password not used yet" : "Active";
}

function Task({ name, of, onPress }: { name: string; of: string; onPress: () => void }) {
  return (
    <Button small onClick={onPress} aria-label={`${name}: ${of}`}>
      {name}
    </Button>
  );
}
