import "server-only";
import { approvalJobs } from "../approvals/jobs";
import { caseJobs } from "../cases/jobs";
import { importJobs } from "../imports/jobs";
import type { Job } from "../job";
import { learningJobs } from "../learning/jobs";
import { lossJobs } from "../losses/jobs";
import { mailJobs } from "../mail/jobs";
import { outcomeJobs } from "../outcomes/jobs";
import { policyJobs } from "../policy/jobs";
import { housekeepingJobs } from "./housekeeping";

/** Everything the server does by itself. A domain lists its own in its `jobs.ts`. */
export const JOBS: readonly Job[] = [
  ...caseJobs,
  ...policyJobs,
  ...approvalJobs,
  ...importJobs,
  ...outcomeJobs,
  ...mailJobs,
  ...lossJobs,
  ...learningJobs,
  ...housekeepingJobs,
];
