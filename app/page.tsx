import { redirect } from "next/navigation";
import type { Role } from "@/lib/auth/codes";
import { pageContext } from "@/lib/auth/page-context";

/** Where a day begins, by the first role that a person holds. */
const FIRST_PAGES: readonly (readonly [Role, string])[] = [
  ["supervisor", "/floor"],
  ["reviewer", "/desk"],
  ["risk_manager", "/losses"],
  ["auditor", "/trail"],
  ["administrator", "/people"],
];

export default async function StartPage() {
  const { actor } = await pageContext("/");
  const first = FIRST_PAGES.find(([role]) => actor.roles.includes(role));
  redirect(first ? first[1] : "/profile");
}
