/** A vector whose length is not the scorer's dimension. */
export class DimensionError extends Error {
  override readonly name = "DimensionError";
}

/** A vector with an entry that is not a finite number. */
export class NotFiniteError extends Error {
  override readonly name = "NotFiniteError";
}

/** An option out of range, or one that the chosen method does not have. */
export class OptionsError extends Error {
  override readonly name = "OptionsError";
}

/** A label other than 1 or -1, or a weight out of range. */
export class LabelError extends Error {
  override readonly name = "LabelError";
}

/** Bytes that are not a whole, unharmed snapshot. */
export class SnapshotError extends Error {
  override readonly name = "SnapshotError";
}

/** A step that does not follow on from where the waiting cases stand. */
export class StepError extends Error {
  override readonly name = "StepError";
}
