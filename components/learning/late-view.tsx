"use client";
import type { UseQueryResult } from "@tanstack/react-query";
import type { ReactNode } from "react";
import type { ApiProblem } from "../api";
import { Button } from "../ui/button";
import { Notice } from "../ui/notice";
import { Skeleton } from "../ui/skeleton";

type LateViewProps<View> = {
  query: UseQueryResult<View, ApiProblem>;
  /** How many lines it will take, so that nothing below jumps. */
  lines: number;
  children: (view: View) => ReactNode;
};

/** A part of the screen whose figures come after the first paint. */
export function LateView<View>({ query, lines, children }: LateViewProps<View>) {
  const { data, error, refetch } = query;
  if (data !== undefined) return children(data);
  if (!error) return <Skeleton lines={lines} className="h-7" />;
  return (
    <Notice kind="error" title="This part did not load">
      {error.message}{" "}
      <Button look="quiet" small className="px-0" onClick={() => void refetch()}>
        Try again
      </Button>
    </Notice>
  );
}
