/** Each figure of the comparison in one sentence, for a supervisor who is no statistician. */
export const FIGURE_TERMS = [
  {
    term: "Label",
    means: "A verdict, or an outcome reported later, from which the scorers learn: fraudulent or legitimate.",
  },
  {
    term: "Loss per label",
    means:
      "How surprised the scorer was by a finding on average, in nats. Saying 50 % every time costs 0.693; knowing everything costs 0. Lower is better.",
  },
  {
    term: "Regret",
    means:
      "What was lost beyond the best that unchanging weights could have done, had they been known from the first label. Below 0 it did better than those. “At most” is what the method guarantees for the labels as they stand in the log now; what was lived with labels that were taken back or replaced since is not in it.",
  },
  {
    term: "Brier",
    means: "Mean squared distance of the probabilities from what was found. Lower is better.",
  },
  {
    term: "AUC",
    means:
      "How often a fraudulent payment had a higher score than a legitimate one. 1 is always, 0.5 is no better than chance.",
  },
  {
    term: "Average precision",
    means:
      "Share of fraud among the highest scores, taken over all places to draw the line. Higher is better.",
  },
  {
    term: "Precision in the top",
    means:
      "Share of fraud among as many of each day's highest scores as the team decides in a day. Days with fewer labels count with all of them.",
  },
  {
    term: "Small print",
    means:
      "Beneath each figure its 95 % interval and n, the labels it is over. Where intervals overlap widely, the labels do not yet tell the scorers apart.",
  },
  {
    term: "After a change of signals or base rate",
    means:
      "The scorer in use is judged by what was predicted at the time; one that runs beside it has lived the whole log again with the change. Compare them on labels since the change.",
  },
] as const;
