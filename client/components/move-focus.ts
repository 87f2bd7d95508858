type KeyEvent = {
  key: string;
  preventDefault: () => void;
  currentTarget: unknown;
  target: unknown;
};

/** Arrow keys, Home and End among the radios or tabs of one group: focuses and presses the neighbour. */
export function moveFocus(event: KeyEvent): void {
  const group = event.currentTarget as HTMLElement;
  const items = [...group.querySelectorAll<HTMLElement>('[role=radio],[role=tab]')];
  const to = targetIndex(event.key, items.indexOf(event.target as HTMLElement), items.length);
  const item = to === null ? undefined : items[to];
  if (!item) return;
  event.preventDefault();
  item.focus();
  item.click();
}

/** Where a key leads from item `at` of `count`, wrapping; null for keys that do not move. */
export function targetIndex(key: string, at: number, count: number): number | null {
  if (at < 0 || count === 0) return null;
  if (key === 'ArrowRight' || key === 'ArrowDown') return (at + 1) % count;
  if (key === 'ArrowLeft' || key === 'ArrowUp') return (at + count - 1) % count;
  if (key === 'Home') return 0;
  if (key === 'End') return count - 1;
  return null;
}
