import { ROLES, type Role } from "@/lib/auth/codes";
import { Checkbox, ChoiceSet } from "../ui/choice";
import { ROLE_WORDS } from "../words";

const WHAT_THEY_DO: Readonly<Record<Role, string>> = {
  reviewer: "decides cases",
  supervisor: "runs the floor, corrects, proposes policy",
  risk_manager: "reads losses, approves policy, sends the weekly summary",
  auditor: "reads everything, changes nothing; with no other role",
  administrator: "people, keys and settings; with no other role",
};

type RoleChoicesProps = {
  roles: readonly Role[];
  onChange: (roles: Role[]) => void;
  error?: string | undefined;
};

export function RoleChoices({ roles, onChange, error }: RoleChoicesProps) {
  const toggle = (role: Role, on: boolean) =>
    onChange(ROLES.filter((each) => (each === role ? on : roles.includes(each))));
  return (
    <ChoiceSet legend="Roles">
      {ROLES.map((role) => (
        <Checkbox
          key={role}
          name="roles"
          label={ROLE_WORDS[role]}
          hint={WHAT_THEY_DO[role]}
          checked={roles.includes(role)}
          onChange={(event) => toggle(role, event.target.checked)}
        />
      ))}
      {error && (
        <p role="alert" className="text-small text-error">
          <span aria-hidden="true">✕ </span>
          {error}
        </p>
      )}
    </ChoiceSet>
  );
}
