import { activitySignals } from "./activity-signals";
import { amountSignals } from "./amount-signals";
import { contextSignals } from "./context-signals";
import { labelSignals } from "./label-signals";
import { noveltySignals } from "./novelty-signals";
import { coordinatesOf, type Signal } from "./signal";
import { timeSignals } from "./time-signals";

/** Raise it with every change that moves, adds or rescales a coordinate: scores of different catalogues do not compare. */
export const CATALOGUE_VERSION = 1;

/** In the order of the vector. Protected attributes (age, sex, origin, faith, health, nationality of a person) never enter. */
export const CATALOGUE: readonly Signal[] = [
  ...amountSignals,
  ...activitySignals,
  ...noveltySignals,
  ...timeSignals,
  ...contextSignals,
  ...labelSignals,
];

/** First coordinate of each signal. */
export const OFFSETS: readonly number[] = CATALOGUE.map((_, i) =>
  CATALOGUE.slice(0, i).reduce((sum, signal) => sum + coordinatesOf(signal), 0),
);

/** All coordinates and the bias, which comes last and is always 1. */
export const DIMENSION = CATALOGUE.reduce((sum, signal) => sum + coordinatesOf(signal), 0) + 1;
