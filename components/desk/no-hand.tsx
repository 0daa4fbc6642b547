"use client";
import { Button } from "../ui/button";
import { EmptyState } from "../ui/empty-state";
import { Skeleton } from "../ui/skeleton";

/** While no case is in hand: one is on its way, or there is none for this person. */
export function NoHand({ dry, onAsk }: { dry: boolean; onAsk: () => void }) {
  return (
    <div className="min-h-64 px-4 py-4 sm:px-6">
      {dry ? (
        <EmptyState title="No case for you right now">
          <p>The next one comes to hand by itself when it is there.</p>
          <Button className="mt-3" onClick={onAsk}>
            Ask again
          </Button>
        </EmptyState>
      ) : (
        <>
          <p className="sr-only" role="status">
            Fetching the next case
          </p>
          <Skeleton lines={6} className="h-6" />
        </>
      )}
    </div>
  );
}
