type SkeletonProps = {
  /** Size of what will stand here: Tailwind classes, so that nothing jumps when it arrives. */
  className?: string;
  lines?: number;
};

export function Skeleton({ className = "", lines = 1 }: SkeletonProps) {
  return (
    <div aria-hidden="true" className="flex flex-col gap-2">
      {Array.from({ length: lines }, (_, line) => (
        // biome-ignore lint/suspicious/noArrayIndexKey: lines are all alike
        <div key={line} className={`h-4 motion-safe:animate-pulse rounded-edge bg-sunk ${className}`} />
      ))}
    </div>
  );
}
