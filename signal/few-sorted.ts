/** Medians of a few numbers, again and again: without making anything. */

/** Of an even number of values, which come out in another order: only those up to the middle need sorting. */
export function medianOf(values: Float64Array, count: number): number {
  const middle = count / 2;
  sortFew(values, middle + 1);
  for (let i = middle + 1; i < count; i++) {
    const value = values[i]!;
    if (value >= values[middle]!) continue;
    let j = middle - 1;
    for (; j >= 0 && values[j]! > value; j--) values[j + 1] = values[j]!;
    values[j + 1] = value;
  }
  return (values[middle - 1]! + values[middle]!) / 2;
}

/** Of `count` sorted numbers `old` goes, where there are as many as can be, and `fresh` takes its place. */
export function replaceSorted(sorted: Float64Array, count: number, old: number, fresh: number): void {
  let j = count;
  if (count === sorted.length) {
    j = 0;
    while (sorted[j]! < old) j++;
    for (; j + 1 < sorted.length && sorted[j + 1]! < fresh; j++) sorted[j] = sorted[j + 1]!;
  }
  for (; j > 0 && sorted[j - 1]! > fresh; j--) sorted[j] = sorted[j - 1]!;
  sorted[j] = fresh;
}

/** Insertion sort: for a couple of dozen numbers ten times faster than the built-in one. */
function sortFew(values: Float64Array, count: number): void {
  for (let i = 1; i < count; i++) {
    const value = values[i]!;
    let j = i - 1;
    for (; j >= 0 && values[j]! > value; j--) values[j + 1] = values[j]!;
    values[j + 1] = value;
  }
}
