import { ORDER_WORDS } from "../words";

export type TermKind = "percent" | "count" | "minutes" | "days" | "money" | "choice" | "flag";

/** One term of the policy as people meet it: in the terms in force, in the form and in a list of differences. */
export type Term = {
  /** Where it is in the terms: "deadlineMinutes.hold". */
  path: string;
  label: string;
  hint: string;
  kind: TermKind;
  /** Behind the number. */
  unit?: string;
  /** What a choice's codes are called, or a flag's two sides. */
  words?: Readonly<Record<string, string>>;
};

export type TermGroup = { title: string; lead: string; terms: readonly Term[] };

const yes = { true: "Yes", false: "No" };

/** The review threshold's three paths: which kind it is, and the number that goes with it. */
export const REVIEW_KIND: Term = {
  path: "reviewThreshold.kind",
  label: "Review threshold",
  hint: "From here on a payment becomes a case.",
  kind: "choice",
  words: { capacity: "By capacity", fixed: "At a fixed probability" },
};
export const REVIEW_CASES: Term = {
  path: "reviewThreshold.casesPerDay",
  label: "Wished cases a day",
  hint: "The line moves with the recent scores so that about this many payments a day lie above it.",
  kind: "count",
  unit: "cases",
};
export const REVIEW_PROBABILITY: Term = {
  path: "reviewThreshold.probability",
  label: "Review from",
  hint: "Payments at least this likely to be fraudulent become cases.",
  kind: "percent",
  unit: "%",
};

export const TERM_GROUPS: readonly TermGroup[] = [
  {
    title: "Lines",
    lead: "Which payments become cases, and which of them are stopped at once.",
    terms: [
      REVIEW_KIND,
      REVIEW_CASES,
      REVIEW_PROBABILITY,
      {
        path: "holdThreshold",
        label: "Hold from",
        hint: "Payments at least this likely to be fraudulent are held or refused. Never below the review line.",
        kind: "percent",
        unit: "%",
      },
      {
        path: "baseRate",
        label: "Base rate",
        hint: "Share of payments taken to be fraudulent before anything is learned. A change re-runs the scorer.",
        kind: "percent",
        unit: "%",
      },
    ],
  },
  {
    title: "Order and shares",
    lead: "What is handed out first, and what is guaranteed a share.",
    terms: [
      {
        path: "order",
        label: "Order of cases",
        hint: "Holds about to expire come first in every order.",
        kind: "choice",
        words: ORDER_WORDS,
      },
      {
        path: "dailyCapacity",
        label: "Daily capacity",
        hint: "Cases the team can decide in a day.",
        kind: "count",
        unit: "cases",
      },
      {
        path: "sampleShare",
        label: "Random sample",
        hint: "Share of the capacity spent on passed payments drawn at random, to know what is missed.",
        kind: "percent",
        unit: "% of capacity",
      },
      {
        path: "secondReviewShare",
        label: "Second reviews",
        hint: "Share of decided cases that a second person reviews without seeing the first verdict.",
        kind: "percent",
        unit: "% of cases",
      },
      {
        path: "overdueEvery",
        label: "Overdue cases",
        hint: "One of so many cases handed out is past its deadline, while there are any.",
        kind: "count",
        unit: "th case handed out",
      },
      {
        path: "sampleEvery",
        label: "Sampled cases",
        hint: "One of so many cases handed out is from the random sample, while there are any.",
        kind: "count",
        unit: "th case handed out",
      },
    ],
  },
  {
    title: "Deadlines",
    lead: "Counted from when a payment came in here.",
    terms: [
      {
        path: "deadlineMinutes.hold",
        label: "Hold cases",
        hint: "Or shortly before the hold itself ends.",
        kind: "minutes",
        unit: "min",
      },
      {
        path: "deadlineMinutes.review",
        label: "Review cases",
        hint: "Payments that went through while they are looked at.",
        kind: "minutes",
        unit: "min",
      },
      {
        path: "deadlineMinutes.sample",
        label: "Sampled cases",
        hint: "Drawn at random from what passed.",
        kind: "minutes",
        unit: "min",
      },
      {
        path: "expiringMinutes",
        label: "About to expire",
        hint: "A hold this close to its end comes first.",
        kind: "minutes",
        unit: "min",
      },
      {
        path: "lifetimeDays",
        label: "Lifetime of an alert",
        hint: "An alert without a hold that nobody reached by then closes unlabelled.",
        kind: "days",
        unit: "days",
      },
      {
        path: "undoMinutes",
        label: "Time to undo",
        hint: "How long a person can take back their own last decision.",
        kind: "minutes",
        unit: "min",
      },
      {
        path: "secondReviewWindowDays",
        label: "Second review within",
        hint: "After the first verdict.",
        kind: "days",
        unit: "days",
      },
    ],
  },
  {
    title: "Costs",
    lead: "What a wrong decision, and a looked-at case, costs.",
    terms: [
      {
        path: "falsePositiveCostMinor",
        label: "Stopping a legitimate payment",
        hint: "Calls, complaints, customers who leave.",
        kind: "money",
      },
      {
        path: "lossGivenFraud",
        label: "Loss given fraud",
        hint: "Share of a fraudulent payment that is lost when it goes through.",
        kind: "percent",
        unit: "% of the amount",
      },
      {
        path: "lostMargin",
        label: "Lost margin",
        hint: "Share of a stopped legitimate payment that would have been earned.",
        kind: "percent",
        unit: "% of the amount",
      },
      {
        path: "reviewCostMinorPerHour",
        label: "An hour of review",
        hint: "What a reviewer's hour costs.",
        kind: "money",
      },
      {
        path: "maturityDays.cards",
        label: "Card labels are final after",
        hint: "Chargebacks come late; until then a label is provisional.",
        kind: "days",
        unit: "days",
      },
      {
        path: "maturityDays.other",
        label: "Other labels are final after",
        hint: "Transfers, direct debits and cash.",
        kind: "days",
        unit: "days",
      },
      {
        path: "maturedUnlabelled",
        label: "Payments without a label by then",
        hint: "A random few a day, no more than were decided by people, may teach the scorer as legitimate.",
        kind: "choice",
        words: { ignored: "Teach nothing", legitimate: "Count as legitimate" },
      },
    ],
  },
  {
    title: "At the desk",
    lead: "How reviewers work.",
    terms: [
      {
        path: "hideScoreUntilVerdict",
        label: "Hide the score until the verdict",
        hint: "So that it does not anchor the reviewer.",
        kind: "flag",
        words: yes,
      },
      {
        path: "takeNextOnly",
        label: "Take the next case only",
        hint: "Reviewers cannot pick from the list.",
        kind: "flag",
        words: yes,
      },
    ],
  },
];

export const ON_HOLD_WORDS: Readonly<Record<string, string>> = {
  hold: "Hold it",
  refuse: "Refuse it",
  let_go: "Let it go and review",
};
export const AT_EXPIRY_WORDS: Readonly<Record<string, string>> = {
  release: "Release it",
  refuse: "Refuse it",
};
