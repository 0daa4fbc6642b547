import { axisPlace } from "./axis-scale";
import { percentOf, signedDecibans } from "./probability";

type ScoreMarkProps = {
  decibans: number;
  probability: number;
  reviewDecibans: number;
  holdDecibans: number;
};

const WIDTH = 96;
const at = (decibans: number) => 3 + axisPlace(decibans) * (WIDTH - 6);

/** The balance, small: zero in the middle, the policy's two thresholds as ticks, the evidence as a bar and pointer. */
export function ScoreMark({ decibans, probability, reviewDecibans, holdDecibans }: ScoreMarkProps) {
  const zero = at(0);
  const pointer = at(decibans);
  const colour = decibans >= 0 ? "fill-ochre" : "fill-verdigris";
  const label = `${signedDecibans(decibans)} decibans, ${percentOf(probability)} %`;
  return (
    <svg
      role="img"
      aria-label={label}
      viewBox={`0 0 ${WIDTH} 16`}
      className="inline-block h-4 w-full max-w-24 align-middle"
    >
      <path d={`M3 11.5H${WIDTH - 3}`} className="stroke-edge" strokeWidth="1" />
      <path d={`M${zero} 8.5V14.5`} className="stroke-edge" strokeWidth="1" />
      <path
        d={`M${at(reviewDecibans)} 8V16M${at(holdDecibans)} 8V16`}
        className="stroke-ink"
        strokeWidth="1"
      />
      <rect
        x={Math.min(zero, pointer)}
        y="5"
        width={Math.abs(pointer - zero)}
        height="4"
        className={colour}
      />
      <rect x={pointer - 1} y="1" width="2" height="10" className={colour} />
    </svg>
  );
}
