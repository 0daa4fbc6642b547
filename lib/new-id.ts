import { uuidv7 } from "uuidv7";

/** A uuidv7: sorts by its time of making. */
export const newId = (): string => uuidv7();
