export type GridPlace = { row: number; column: number };

export type GridKey = { key: string; ctrlKey: boolean };

/**
 * Where a key leads within the grid, as the WAI-ARIA Authoring Practices describe for data grids; null for keys that
 * do not move. Places never leave the grid.
 */
export function moveInGrid(
  { row, column }: GridPlace,
  { key, ctrlKey }: GridKey,
  size: { rows: number; columns: number; page: number },
): GridPlace | null {
  const to = (toRow: number, toColumn: number): GridPlace => ({
    row: Math.min(Math.max(toRow, 0), Math.max(size.rows - 1, 0)),
    column: Math.min(Math.max(toColumn, 0), size.columns - 1),
  });
  switch (key) {
    case "ArrowUp":
      return to(row - 1, column);
    case "ArrowDown":
      return to(row + 1, column);
    case "ArrowLeft":
      return to(row, column - 1);
    case "ArrowRight":
      return to(row, column + 1);
    case "PageUp":
      return to(row - size.page, column);
    case "PageDown":
      return to(row + size.page, column);
    case "Home":
      return ctrlKey ? to(0, 0) : to(row, 0);
    case "End":
      return ctrlKey ? to(size.rows - 1, size.columns - 1) : to(row, size.columns - 1);
    default:
      return null;
  }
}
