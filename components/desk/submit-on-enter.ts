import type { KeyboardEvent } from "react";

/** In a form's text area: Enter sends the form, Shift+Enter stays a new line. */
export function submitOnEnter(event: KeyboardEvent<HTMLTextAreaElement>): void {
  if (event.key !== "Enter" || event.shiftKey || event.nativeEvent.isComposing) return;
  event.preventDefault();
  if (!event.repeat) event.currentTarget.form?.requestSubmit();
}
