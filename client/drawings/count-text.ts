/** "no gaps", "1 gap", "3 gaps". */
export function countText(count: number, one: string, many = `${one}s`): string {
  return `${count === 0 ? 'no' : count} ${count === 1 ? one : many}`;
}
