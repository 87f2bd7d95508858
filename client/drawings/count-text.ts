/** "no gaps", "1 gap", "3 gaps". */
export function countText(count: number, one: string, many = `${one}s`): string {
  return `${count === 0 ? 'no' : count} ${count === 1 ? one : many}`;
}

/** What a position of the wheel is called, one and many: where three sensors look at a ring of poles it is no tooth. */
export function positionNouns(sensing: string): [one: string, many: string] {
  return sensing === 'three-hall' ? ['pole pair', 'pole pairs'] : ['tooth', 'teeth'];
}
