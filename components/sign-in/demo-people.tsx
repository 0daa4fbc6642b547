import type { DemoSignIn } from "@/lib/auth/demo-sign-ins";
import { Button } from "../ui/button";
import { ROLE_WORDS } from "../words";
import type { Credentials } from "./credentials";

type DemoPeopleProps = {
  people: readonly DemoSignIn[];
  busy: boolean;
  onPick: (credentials: Credentials) => void;
};

/** One button for each invented person of the demo; it sends what the form would send. */
export function DemoPeople({ people, busy, onPick }: DemoPeopleProps) {
  return (
    <section aria-labelledby="demo-people" className="border-t border-rule pt-4">
      <h2 id="demo-people" className="text-title font-strong">
        Look around as
      </h2>
      <p className="text-small text-soft">
        This is a demo with invented people and payments. Everybody's password is “{people[0]?.password}”.
      </p>
      <ul className="mt-3 grid gap-2 sm:grid-cols-2">
        {people.map(({ role, name, email, password }) => (
          <li key={email}>
            <Button className="w-full" busy={busy} onClick={() => onPick({ email, password })}>
              <span>
                {ROLE_WORDS[role]}
                <span className="font-plain text-soft">, {name}</span>
              </span>
            </Button>
          </li>
        ))}
      </ul>
    </section>
  );
}
