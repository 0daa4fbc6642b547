const TYPING_INPUTS = /^(?!radio$|checkbox$|button$|submit$|reset$)/;

/** Whether keys belong to what has the focus: someone is writing there, or choosing from a list. */
export function isTyping(target: EventTarget | null): boolean {
  if (!(target instanceof HTMLElement)) return false;
  if (target.isContentEditable) return true;
  if (target instanceof HTMLInputElement) return TYPING_INPUTS.test(target.type);
  return target instanceof HTMLTextAreaElement || target instanceof HTMLSelectElement;
}

/** Whether Enter already means something where the focus is. */
export function takesEnter(target: EventTarget | null): boolean {
  return target instanceof Element && target.closest("button, a[href], summary") !== null;
}
