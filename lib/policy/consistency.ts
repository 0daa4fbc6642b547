import type { FieldError } from "../errors";
import { CHANNELS } from "../transactions/codes";
import { CHANNELS_WITHOUT_HOLD } from "./codes";
import { costsOf, isReasonable } from "./costs";
import type { PolicyTerms } from "./schema";

/** At least this share of the cases handed out follows the policy's order. */
const LEAST_SHARE_BY_ORDER = 0.25;
const DAY_MINUTES = 24 * 60;

/** What is wrong with terms whose every field is fine by itself; one line per fault, by the field to change. */
export function termsFaults(terms: PolicyTerms): FieldError[] {
  return [...thresholdFaults(terms), ...shareFaults(terms), ...costFaults(terms), ...timeFaults(terms)];
}

function thresholdFaults({ reviewThreshold, holdThreshold, baseRate }: PolicyTerms): FieldError[] {
  const faults: FieldError[] = [];
  if (reviewThreshold.kind === "fixed") {
    if (holdThreshold < reviewThreshold.probability)
      faults.push(fault("holdThreshold", "must not be below the review threshold"));
    if (baseRate >= reviewThreshold.probability)
      faults.push(
        fault("baseRate", "must be below the review threshold, or an untrained scorer alerts on all"),
      );
  }
  if (baseRate >= holdThreshold)
    faults.push(
      fault("baseRate", "must be below the hold threshold, or an untrained scorer holds everything"),
    );
  return faults;
}

function shareFaults(terms: PolicyTerms): FieldError[] {
  const { reviewThreshold, sampleShare, secondReviewShare, overdueEvery, sampleEvery, dailyCapacity } = terms;
  const faults: FieldError[] = [];
  if (sampleShare + secondReviewShare >= 1)
    faults.push(fault("secondReviewShare", "leaves no capacity for alerts beside the random sample"));
  if (1 / overdueEvery + 1 / sampleEvery > 1 - LEAST_SHARE_BY_ORDER)
    faults.push(
      fault(
        "overdueEvery",
        "with the samples, leaves less than a quarter of the cases to the policy's order",
      ),
    );
  if (sampleShare > 1 / sampleEvery)
    faults.push(fault("sampleEvery", "hands out fewer samples than are drawn; they would never be reviewed"));
  if (reviewThreshold.kind === "capacity" && reviewThreshold.casesPerDay > dailyCapacity)
    faults.push(fault("reviewThreshold.casesPerDay", "is more than the daily capacity"));
  return faults;
}

/** A cost matrix has to be reasonable for a threshold to follow from it (Elkan 2001); any amount shows it. */
function costFaults(terms: PolicyTerms): FieldError[] {
  if (isReasonable(costsOf(terms, 1))) return [];
  const faults: FieldError[] = [];
  if (terms.falsePositiveCostMinor <= 0)
    faults.push(
      fault("falsePositiveCostMinor", "must be above 0: stopping a legitimate payment is never free"),
    );
  if (terms.lossGivenFraud <= 0)
    faults.push(fault("lossGivenFraud", "must be above 0: letting fraud go is never free"));
  return faults;
}

function timeFaults(terms: PolicyTerms): FieldError[] {
  const faults: FieldError[] = [];
  for (const channel of CHANNELS) {
    const { onHold, holdMinutes } = terms.channels[channel];
    if (onHold !== "hold") continue;
    const path = `channels.${channel}`;
    if (CHANNELS_WITHOUT_HOLD.includes(channel))
      faults.push(fault(`${path}.onHold`, "this kind of payment cannot be held, only refused or let go"));
    else if (holdMinutes <= terms.undoMinutes)
      faults.push(
        fault(`${path}.holdMinutes`, "must be longer than the time in which a decision can be undone"),
      );
    else if (holdMinutes < terms.deadlineMinutes.hold)
      faults.push(fault(`${path}.holdMinutes`, "ends before the deadline of a hold case"));
    else if (holdMinutes <= terms.expiringMinutes)
      faults.push(fault(`${path}.holdMinutes`, "would count as about to expire from the start"));
  }
  if (terms.deadlineMinutes.review > terms.lifetimeDays * DAY_MINUTES)
    faults.push(fault("lifetimeDays", "ends before the deadline of a review case"));
  return faults;
}

const fault = (path: string, message: string): FieldError => ({ path, message });
