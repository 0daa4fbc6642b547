import type { StreamPayment } from "./stream-payments";

const TEST_DAYS = 7;
const TOP_ACCOUNTS = 100;
/** Fraud of the training week, and then day by day, is reported so many days later. */
const REPORTED_AFTER_DAYS = 7;
const TRAINING_DAYS = 7;

export type Judgement = { auc: number; averagePrecision: number; precisionTop: number; fraudulent: number };

/**
 * How good the scores at arrival of one week were, by the protocol of Le Borgne, Siblini, Lebichot, Bontempi,
 * "Reproducible Machine Learning for Credit Card Fraud Detection: Practical Handbook" (2022), chapter 5: accounts whose
 * compromise is known (from a training week, a delay of seven days apart, then day by day) are left out; precision in
 * the top hundred accounts is the mean over the days, and an account once detected is not counted again.
 * @param scores one for each payment, any monotone score
 */
export function judgeWeek(
  payments: readonly StreamPayment[],
  scores: Float64Array,
  testFromDay: number,
): Judgement {
  const compromised = new Map<number, Set<string>>();
  for (const { day, accountId, isFraud } of payments) {
    if (isFraud) compromised.set(day, (compromised.get(day) ?? new Set()).add(accountId));
  }
  const known = new Set<string>();
  const learnOf = (day: number) => {
    for (const account of compromised.get(day) ?? []) known.add(account);
  };
  const trainingFrom = testFromDay - REPORTED_AFTER_DAYS - TRAINING_DAYS;
  for (let day = trainingFrom; day < trainingFrom + TRAINING_DAYS; day++) learnOf(day);
  const detected = new Set<string>();
  const pool: { score: number; isFraud: boolean }[] = [];
  let precision = 0;
  for (let day = testFromDay; day < testFromDay + TEST_DAYS; day++) {
    learnOf(day - REPORTED_AFTER_DAYS - 1);
    const best = new Map<string, { score: number; isFraud: boolean }>();
    payments.forEach((payment, index) => {
      const { accountId, isFraud } = payment;
      if (payment.day !== day || known.has(accountId)) return;
      const score = scores[index] as number;
      pool.push({ score, isFraud });
      if (detected.has(accountId)) return;
      const before = best.get(accountId);
      best.set(accountId, {
        score: Math.max(score, before?.score ?? Number.NEGATIVE_INFINITY),
        isFraud: isFraud || (before?.isFraud ?? false),
      });
    });
    const top = [...best].sort((a, b) => b[1].score - a[1].score).slice(0, TOP_ACCOUNTS);
    const found = top.filter(([, account]) => account.isFraud);
    precision += found.length / TOP_ACCOUNTS / TEST_DAYS;
    for (const [account] of found) detected.add(account);
  }
  return { ...areasOf(pool), precisionTop: precision };
}

/** Ties share one threshold. */
function areasOf(pool: { score: number; isFraud: boolean }[]) {
  pool.sort((a, b) => b.score - a.score);
  const fraudulent = pool.filter((one) => one.isFraud).length;
  const legitimate = pool.length - fraudulent;
  let [found, alarms, auc, averagePrecision] = [0, 0, 0, 0];
  for (let from = 0; from < pool.length; ) {
    let [to, foundHere] = [from, 0];
    for (; to < pool.length && pool[to]?.score === pool[from]?.score; to++)
      if (pool[to]?.isFraud) foundHere++;
    const alarmsHere = to - from - foundHere;
    auc += (alarmsHere / legitimate) * ((found + foundHere / 2) / fraudulent);
    found += foundHere;
    alarms += alarmsHere;
    averagePrecision += (foundHere / fraudulent) * (found / (found + alarms));
    from = to;
  }
  return { auc, averagePrecision, fraudulent };
}
