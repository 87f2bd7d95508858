/**
 * Linear least squares for a handful of unknowns: minimises |A x - y| by Householder reflections, which keep twice the
 * digits that normal equations would.
 * Source: G. H. Golub, Numerische Mathematik 7 (1965) 206-216.
 */
import { notFinite, refused, got, type Outcome } from '@/signal/statistics/issue';

export type LeastSquares = {
  /** One coefficient a column. */
  x: Float64Array;
  /** Root of the sum of squared residuals over (rows - columns); 0 where rows = columns. */
  residualRms: number;
  /** Standard error of each coefficient over the standard error of one row: root of the diagonal of (A'A)^-1. */
  errorShares: Float64Array;
};

/** Smallest ratio of a column's part of its own to the whole column before its coefficient counts as undetermined. */
const leastOwnShare = 1e-9;

/**
 * @param columns each of `y.length` rows, finite; neither they nor `y` are changed.
 * Issues: bad-setting (a column of another length), too-few (fewer rows than columns), not-finite, undetermined (a column is a mix of the others).
 */
export function leastSquares(columns: readonly Float64Array[], y: ArrayLike<number>): Outcome<LeastSquares> {
  const rows = y.length;
  const n = columns.length;
  if (columns.some((column) => column.length !== rows))
    return refused('bad-setting', `columns must have ${rows} rows each`);
  if (rows < n || n === 0) return refused('too-few', `${rows} rows for ${n} unknowns`);
  const bad = notFinite(y, 'value') ?? columns.map((column) => notFinite(column, 'row')).find(Boolean);
  if (bad) return bad;
  const work = columns.map((column) => Float64Array.from(column));
  const right = Float64Array.from(y);
  const diagonal = new Float64Array(n);
  for (let j = 0; j < n; j++) {
    const column = work[j]!;
    const own = normFrom(column, j);
    if (!(own > leastOwnShare * normFrom(columns[j]!, 0)))
      return refused('undetermined', `unknown ${j} cannot be told from the others`);
    diagonal[j] = column[j]! > 0 ? -own : own;
    column[j] = column[j]! - diagonal[j]!;
    const scale = -1 / (diagonal[j]! * column[j]!);
    for (let k = j + 1; k < n; k++) reflect(column, j, scale, work[k]!);
    reflect(column, j, scale, right);
  }
  const x = new Float64Array(n);
  for (let j = n - 1; j >= 0; j--) {
    let sum = right[j]!;
    for (let k = j + 1; k < n; k++) sum -= work[k]![j]! * x[k]!;
    x[j] = sum / diagonal[j]!;
  }
  const left = normFrom(right, n);
  return got({
    x,
    residualRms: rows > n ? left / Math.sqrt(rows - n) : 0,
    errorShares: errorShares(work, diagonal),
  });
}

/** Row norms of R^-1: R holds `work[k][j]` above its diagonal. */
function errorShares(work: readonly Float64Array[], diagonal: Float64Array): Float64Array {
  const n = diagonal.length;
  const squares = new Float64Array(n);
  const inverse = new Float64Array(n);
  for (let c = 0; c < n; c++) {
    inverse.fill(0);
    inverse[c] = 1 / diagonal[c]!;
    for (let j = c - 1; j >= 0; j--) {
      let sum = 0;
      for (let k = j + 1; k <= c; k++) sum -= work[k]![j]! * inverse[k]!;
      inverse[j] = sum / diagonal[j]!;
    }
    for (let j = 0; j <= c; j++) squares[j] = squares[j]! + inverse[j]! * inverse[j]!;
  }
  return squares.map(Math.sqrt);
}

function normFrom(values: Float64Array, from: number): number {
  let largest = 0;
  for (let i = from; i < values.length; i++) largest = Math.max(largest, Math.abs(values[i]!));
  if (largest === 0) return 0;
  let sum = 0;
  for (let i = from; i < values.length; i++) sum += (values[i]! / largest) ** 2;
  return largest * Math.sqrt(sum);
}

function reflect(mirror: Float64Array, from: number, scale: number, target: Float64Array): void {
  let dot = 0;
  for (let i = from; i < mirror.length; i++) dot += mirror[i]! * target[i]!;
  const amount = dot * scale;
  for (let i = from; i < mirror.length; i++) target[i] = target[i]! - amount * mirror[i]!;
}
