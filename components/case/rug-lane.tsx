import { memo } from "react";
import { rugTicks } from "../desk/rug";

type RugLaneProps = { evidenceDecibans: readonly number[] };

/** Every waiting case as a fine tick; one path, however many there are. */
export const RugLane = memo(function RugLane({ evidenceDecibans }: RugLaneProps) {
  const path = rugTicks(evidenceDecibans)
    .map(({ place, height }) => `M${(place * 1000).toFixed(1)} 100V${(100 - height * 100).toFixed(1)}`)
    .join("");
  return (
    <svg
      aria-hidden="true"
      viewBox="0 0 1000 100"
      preserveAspectRatio="none"
      className="absolute inset-0 size-full overflow-visible"
    >
      <path d={path} vectorEffect="non-scaling-stroke" strokeWidth="1" className="stroke-soft" />
    </svg>
  );
});
