import type { Capability } from "./access";

/** Every page and the capability it takes; a page that is not listed is refused. Order is the order of the menu. */
export const PAGES = {
  "/": { may: "anyone", name: "Start" },
  "/sign-in": { may: "anyone", name: "Sign in" },
  "/desk": { may: "desk.work", name: "Desk" },
  "/cases": { may: "cases.read", name: "Cases" },
  "/cases/[id]": { may: "cases.read", name: "Case" },
  "/floor": { may: "floor.read", name: "Floor" },
  "/policy": { may: "policy.read", name: "Policy" },
  "/learning": { may: "scorer.read", name: "Learning" },
  "/signals": { may: "scorer.read", name: "Signals" },
  "/losses": { may: "losses.read", name: "Losses" },
  "/trail": { may: "trail.read", name: "Trail" },
  "/trail/decisions/[id]": { may: "trail.own", name: "Decision" },
  "/intake": { may: "intake.read", name: "Intake" },
  "/intake/[id]": { may: "intake.read", name: "Import" },
  "/people": { may: "people.read", name: "People" },
  "/profile": { may: "account.own", name: "Profile" },
  "/unsubscribe/[token]": { may: "anyone", name: "Weekly summaries" },
} as const satisfies Record<string, { may: Capability | "anyone"; name: string }>;

export type PagePath = keyof typeof PAGES;
