import { describe, expect, test } from "vitest";
import { averagePrecision } from "@/lib/quality/average-precision";
import { brier } from "@/lib/quality/brier";
import { isotonicFit } from "@/lib/quality/isotonic";
import { meanLogLoss } from "@/lib/quality/mean-log-loss";
import { rocArea } from "@/lib/quality/roc-area";
import { compareRocAreas } from "@/lib/quality/roc-comparison";
import { bestInHindsight } from "@/lib/scorer";
import { fitInBall } from "@/lib/scorer/hindsight";
import { drawLabelled, seededNumbers } from "../scorer/fixture";
import { csvOf, type Outside, outsidePython, outsideR } from "./outside-programs";

/** So large that the fit is the ordinary maximum-likelihood one. */
const UNBOUNDED = 1e6;

/** A test that runs where the program is installed, and says what to install where it is not. */
function testWith(outside: Outside, name: string, run: () => void): void {
  test(name, ({ skip }) => {
    if (outside.missing) skip(outside.missing);
    run();
  });
}

function expectNear(found: ArrayLike<number>, expected: readonly number[], relative: number): void {
  expect(found.length).toBe(expected.length);
  expected.forEach((value, i) => {
    expect(Math.abs((found[i] as number) - value)).toBeLessThan(relative * Math.max(1, Math.abs(value)));
  });
}

const DRAWN = drawLabelled(800, 6, 20);
/** Label first, as 1 or 0. */
const DRAWN_CSV = csvOf(DRAWN.vectors.map((x, n) => Float64Array.of(DRAWN.labels[n] === 1 ? 1 : 0, ...x)));

/** Probabilities in hundredths, so that many are equal. */
const JUDGED = (() => {
  const unit = seededNumbers(21);
  const p = Float64Array.from({ length: 2_000 }, () => Math.round(100 * (0.01 + 0.9 * unit() ** 3)) / 100);
  const other = p.map((one) => Math.round(20 * (one + 0.4 * unit())) / 20);
  return { p, other, labels: Int8Array.from(p, (one) => (unit() < one ? 1 : -1)) };
})();
const JUDGED_CSV = csvOf(
  Array.from(JUDGED.p, (p, i) =>
    Float64Array.of(JUDGED.labels[i] === 1 ? 1 : 0, p, JUDGED.other[i] as number),
  ),
);

const R_NUMBERS = `json <- function(x) cat("[", paste(format(x, digits = 17, trim = TRUE), collapse = ","), "]", sep = "")
control <- glm.control(epsilon = 1e-14, maxit = 100)\n`;

describe("R", () => {
  const r = outsideR();

  testWith(r, "fits the same weights and deviance to a drawn set by glm", () => {
    const [deviance, ...weights] = r.run<number[]>(
      `${R_NUMBERS}d <- as.matrix(read.csv(file("stdin"), header = FALSE))
       fit <- glm.fit(d[, -1], d[, 1], family = binomial(), intercept = FALSE, control = control)
       json(c(fit$deviance, fit$coefficients))`,
      DRAWN_CSV,
    );
    const fit = bestInHindsight(DRAWN.vectors, DRAWN.labels, UNBOUNDED);
    expectNear(fit.weights, weights, 1e-7);
    expectNear([2 * fit.loss], [deviance as number], 1e-10);
  });

  testWith(r, "pools the same shares by isoreg", () => {
    const unit = seededNumbers(4);
    const values = Float64Array.from({ length: 300 }, (_, i) => i / 100 + 2 * unit());
    const expected = r.run<number[]>(
      `${R_NUMBERS}json(isoreg(scan(file("stdin"), quiet = TRUE))$yf)`,
      [...values].join("\n"),
    );
    expectNear(isotonicFit(values), expected, 1e-12);
  });

  const proc = outsideR("pROC");
  testWith(proc, "finds the same areas, intervals and comparison by pROC", () => {
    const [area, low, high, other, z, p] = proc.run<[number, number, number, number, number, number]>(
      `${R_NUMBERS}d <- read.csv(file("stdin"), header = FALSE)
       a <- roc(d[, 1], d[, 2], levels = c(0, 1), direction = "<")
       b <- roc(d[, 1], d[, 3], levels = c(0, 1), direction = "<")
       t <- roc.test(a, b, method = "delong", paired = TRUE)
       i <- ci.auc(a, method = "delong")
       json(c(i[2], i[1], i[3], b$auc, t$statistic, t$p.value))`,
      JUDGED_CSV,
    );
    const found = rocArea(JUDGED.p, JUDGED.labels);
    expectNear([found?.area ?? 0, found?.low ?? 0, found?.high ?? 0], [area, low, high], 1e-12);
    const compared = compareRocAreas(JUDGED.p, JUDGED.other, JUDGED.labels);
    expectNear([area - (compared?.difference ?? 0)], [other], 1e-12);
    expectNear([compared?.z ?? 0], [z], 1e-8);
    expectNear([compared?.p ?? 0], [p], 1e-10);
  });
});

/** Real data of R's own packages and of Debian's: exported here and fitted by both. Outcome, package, formula. */
const REAL = [
  [
    "189 births (Hosmer and Lemeshow 1989)",
    "MASS",
    "birthwt",
    "low ~ age + lwt + factor(race) + smoke + ptl + ht + ui",
  ],
  ["248 women (Trichopoulos and others 1976)", "datasets", "infert", "case ~ spontaneous + induced"],
  ["32 cars (Henderson and Velleman 1981)", "datasets", "mtcars", "am ~ wt"],
  ["200 Pima women (Ripley 1996)", "MASS", "Pima.tr", "type ~ npreg + glu + bp + skin + bmi + ped + age"],
  ["768 Pima women (UCI repository)", "mlbench", "PimaIndiansDiabetes", "diabetes ~ ."],
] as const;

describe("glm on real data", () => {
  for (const [name, library, set, formula] of REAL) {
    const r = library === "datasets" ? outsideR() : outsideR(library);
    testWith(r, `of ${name} has the same weights and log-likelihood`, () => {
      const { weights, loss, rows } = r.run<{ weights: number[]; loss: number[]; rows: number[][] }>(
        `${R_NUMBERS}data(${set})
         fit <- glm(${formula}, family = binomial(), data = ${set}, control = control)
         cat('{"weights":'); json(coef(fit)); cat(',"loss":'); json(-logLik(fit)); cat(',"rows":[')
         m <- cbind(fit$y, model.matrix(fit))
         for (i in seq_len(nrow(m))) { if (i > 1) cat(","); json(m[i, ]) }
         cat("]}")`,
      );
      const fit = bestInHindsight(
        rows.map((row) => Float64Array.from(row.slice(1))),
        rows.map((row) => (row[0] === 1 ? 1 : -1)),
        UNBOUNDED,
      );
      expectNear(fit.weights, weights, 1e-6);
      expectNear([fit.loss], loss, 1e-10);
    });
  }
});

describe("scikit-learn", () => {
  const python = outsidePython("sklearn.linear_model, sklearn.metrics, sklearn.datasets", "python3-sklearn");
  const READ = `import sys, json, numpy as np
d = np.loadtxt(sys.stdin, delimiter=",")\n`;

  testWith(python, "fits the same weights to a drawn set without a penalty", () => {
    const weights = python.run<number[]>(
      `${READ}m = sklearn.linear_model.LogisticRegression(penalty=None, fit_intercept=False, solver="newton-cg", tol=1e-12, max_iter=1000)
print(json.dumps(m.fit(d[:, 1:], d[:, 0]).coef_[0].tolist()))`,
      DRAWN_CSV,
    );
    expectNear(bestInHindsight(DRAWN.vectors, DRAWN.labels, UNBOUNDED).weights, weights, 1e-6);
  });

  testWith(python, "fits the same weights to 569 breast tumours with a ridge penalty", () => {
    // Wisconsin diagnostic data (Street, Wolberg and Mangasarian 1993) carried by scikit-learn; the classes can nearly be
    // separated, so that only the penalty keeps the weights finite. C = 1 is our lambda of 1/2.
    const { rows, weights } = python.run<{ rows: number[][]; weights: number[] }>(
      `import json, numpy as np
x, y = sklearn.datasets.load_breast_cancer(return_X_y=True)
x = np.c_[(x - x.mean(0)) / x.std(0), np.ones(len(y))]
m = sklearn.linear_model.LogisticRegression(C=1, fit_intercept=False, solver="newton-cg", tol=1e-12, max_iter=1000).fit(x, y)
print(json.dumps({"rows": np.c_[y, x].tolist(), "weights": m.coef_[0].tolist()}))`,
    );
    const fit = fitInBall({
      vectors: rows.map((row) => Float64Array.from(row.slice(1))),
      labels: rows.map((row) => (row[0] === 1 ? 1 : -1)),
      weightBound: UNBOUNDED,
      regularization: 0.5,
      offset: 0,
    });
    expectNear(fit.weights, weights, 1e-6);
  });

  testWith(python, "finds the same area, average precision, Brier score and log-loss, ties and all", () => {
    const expected = python.run<number[]>(
      `${READ}y, p = d[:, 0], d[:, 1]
s = sklearn.metrics
print(json.dumps([s.roc_auc_score(y, p), s.average_precision_score(y, p), s.brier_score_loss(y, p), s.log_loss(y, p)]))`,
      JUDGED_CSV,
    );
    const { p, labels } = JUDGED;
    expectNear(
      [
        rocArea(p, labels)?.area ?? 0,
        averagePrecision(p, labels) ?? 0,
        brier(p, labels)?.value ?? 0,
        meanLogLoss(p, labels)?.value ?? 0,
      ],
      expected,
      1e-12,
    );
  });
});
