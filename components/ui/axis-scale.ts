/** The balance runs over ±30 decibans (a thousand to one either way); what lies beyond stands at the end. */
export const AXIS_DECIBANS = 30;

/** Place on the axis from 0 (legitimate end) over ½ (even odds) to 1 (fraud end). */
export function axisPlace(decibans: number): number {
  const held = Math.max(-AXIS_DECIBANS, Math.min(AXIS_DECIBANS, decibans));
  return (held + AXIS_DECIBANS) / (2 * AXIS_DECIBANS);
}
