/** JSON of a value whose arrays may be very long, a slice at a time: one call would hold the event loop for all of it. */

const sliceItems = 2_000;

/** The slices joined are what `JSON.stringify(value)` gives, for plain data without `undefined` in arrays. */
export function* jsonSlices(value: unknown): Generator<string> {
  if (Array.isArray(value) && value.length > sliceItems) {
    for (let from = 0; from < value.length; from += sliceItems) {
      const text = JSON.stringify(value.slice(from, from + sliceItems));
      yield `${from === 0 ? '[' : ','}${text.slice(1, -1)}`;
    }
    yield ']';
  } else if (typeof value === 'object' && value !== null && !Array.isArray(value)) {
    let separator = '{';
    for (const [key, member] of Object.entries(value)) {
      if (member === undefined) continue;
      yield `${separator}${JSON.stringify(key)}:`;
      yield* jsonSlices(member);
      separator = ',';
    }
    yield separator === '{' ? '{}' : '}';
  } else {
    yield JSON.stringify(value);
  }
}
