/**
 * A SenML pack of voltages as a recording: each name after the base name is a channel, and all channels agree in start,
 * rate and length.
 */
import { blockLimits } from '../block';
import type { IngestIssue } from '../block';
import { channelNameFault, rateFault, voltsFault } from './fields';
import { createPieces, runAtOnce } from './recording';
import type { Pieces, RecordingResult, Steps } from './recording';
import { invalid, quoted, tooLarge } from './result';
import { absoluteTimeS, applyBase, createSenmlBase, measurementFault } from './senml';
import type { SenmlBase, SenmlRecord } from './senml';
import { senmlCborRecords, senmlJsonRecords } from './senml-records';

export type SenmlOptions = {
  format: 'json' | 'cbor';
  /** What times relative to now refer to: Unix time, s. */
  nowS: number;
  /** What a body may have; that of a request to the hub where undefined. */
  maxBytes?: number;
};

/** Reads a whole pack at once. Never throws. */
export function decodeSenml(bytes: Uint8Array, options: SenmlOptions): RecordingResult {
  return runAtOnce(decodeSenmlSteps(bytes, options));
}

const samplesAtOnce = 65_536;
const maxSorted = 262_144;

type Series = {
  name: string;
  fullName: string;
  values: Pieces<Float64Array>;
  /** Seconds after the pack's first time: the sum of the two times would round at high rates. */
  offsets: Pieces<Float64Array>;
};
type Pack = { firstBaseS: number | undefined; series: Map<string, Series> };

/** As `decodeSenml`, in steps of some hundred records. */
export function* decodeSenmlSteps(bytes: Uint8Array, options: SenmlOptions): Steps<RecordingResult> {
  const { maxBytes = blockLimits.maxBodyBytes } = options;
  if (bytes.byteLength > maxBytes) return failed(tooLarge(`A SenML body has at most ${maxBytes} bytes.`));
  const base = createSenmlBase();
  const pack: Pack = { firstBaseS: undefined, series: new Map() };
  let number = 0;
  for (const batch of options.format === 'json' ? senmlJsonRecords(bytes) : senmlCborRecords(bytes)) {
    if (!batch.ok) return batch;
    for (const record of batch.records) {
      const issue = addRecord(pack, record, base, `/${number++}`);
      if (issue) return failed(issue);
    }
    yield;
  }
  return yield* finish(pack, options.nowS);
}

function addRecord(pack: Pack, record: SenmlRecord, base: SenmlBase, where: string): IngestIssue | undefined {
  const fault = applyBase(record, base, where) ?? measurementFault(record, base, where);
  if (fault === false) return undefined;
  if (fault) return fault;
  const unit = record.u ?? base.unit;
  if (unit !== undefined && unit !== '' && unit !== 'V')
    return invalid(`The unit ${quoted(unit)} is not V: a rig takes voltages.`, where + '/u');
  if (record.vs !== undefined || record.vb !== undefined || record.vd !== undefined)
    return invalid('The value is not a number: a rig takes voltages.', where);
  if (record.v === undefined && record.s !== undefined)
    return invalid('The record holds only a sum: a rig takes voltages.', where + '/s');
  const series = seriesOf(pack, record, base, where);
  if ('slug' in series) return series;
  const value = (base.value ?? 0) + (record.v ?? 0);
  const unusable = voltsFault(value);
  if (unusable !== undefined) return invalid(unusable, where + '/v');
  pack.firstBaseS ??= base.timeS;
  series.values.push(value);
  series.offsets.push(base.timeS - pack.firstBaseS + (record.t ?? 0));
  return undefined;
}

function seriesOf(pack: Pack, record: SenmlRecord, base: SenmlBase, where: string): Series | IngestIssue {
  const name = record.n ?? '';
  const fullName = base.name + name;
  const known = pack.series.get(name);
  if (known !== undefined) {
    if (known.fullName === fullName) return known;
    return invalid(`The channel ${quoted(name)} comes from two devices.`, where + '/n');
  }
  if (name === '') return invalid('A record names no channel after its base name.', where + '/n');
  const fault = channelNameFault(name);
  if (fault !== undefined) return invalid(fault, where + '/n');
  if (pack.series.size >= blockLimits.maxChannels)
    return tooLarge(`A recording has at most ${blockLimits.maxChannels} channels.`, where + '/n');
  const make = (length: number): Float64Array => new Float64Array(length);
  const series = { name, fullName, values: createPieces(make), offsets: createPieces(make) };
  pack.series.set(name, series);
  return series;
}

function* finish(pack: Pack, nowS: number): Steps<RecordingResult> {
  const all: Series[] = [];
  for (const series of pack.series.values()) {
    const ordered = inOrder(series);
    if (ordered === undefined)
      return failed(invalid(`The channel ${quoted(series.name)} is long and not in order of time.`));
    all.push(ordered);
    yield;
  }
  const first = all[0];
  if (first === undefined) return failed(invalid('The pack holds no measurement.'));
  const length = first.offsets.length();
  for (const { name, offsets } of all) {
    if (offsets.length() < 2) return failed(invalid(`The channel ${quoted(name)} has fewer than 2 samples.`));
    if (offsets.length() !== length)
      return failed(
        invalid(
          `The channel ${quoted(name)} has ${offsets.length()} samples, ${quoted(first.name)} has ${length}.`,
        ),
      );
  }
  const startS = first.offsets.at(0);
  const stepS = (first.offsets.at(length - 1) - startS) / (length - 1);
  const rateHz = 1 / stepS;
  const fault = rateFault(rateHz);
  if (fault !== undefined)
    return failed(invalid(`${fault} The times of this pack give ${Number(rateHz.toPrecision(6))} Hz.`));
  for (const { name, offsets } of all) {
    yield;
    for (let i = 0; i < length; i++) {
      if (i % samplesAtOnce === samplesAtOnce - 1) yield;
      if (Math.abs(offsets.at(i) - (startS + i * stepS)) <= 0.01 * stepS) continue;
      const what = i === 0 ? 'start together' : 'stand at equal steps of time, the same for all channels';
      const detail = `Sample ${i + 1} of ${quoted(name)} does not ${what}, within 1 % of the step.`;
      return failed(invalid(detail, undefined, `sample ${i + 1} of ${name}`));
    }
  }
  const columns = all.map((series) => series.values.finish());
  return {
    ok: true,
    recording: {
      rateHz,
      timeS: absoluteTimeS((pack.firstBaseS ?? 0) + startS, nowS),
      channels: all.map((series) => series.name),
      length,
      pieces: columns[0]!.map((_, p) => columns.map((column) => column[p]!)),
    },
  };
}

/** A series in order of time (section 4.6), which it nearly always is already; a very long one is not sorted. */
function inOrder(series: Series): Series | undefined {
  const { values, offsets } = series;
  const length = offsets.length();
  let sorted = true;
  for (let i = 1; sorted && i < length; i++) sorted = offsets.at(i - 1) <= offsets.at(i);
  if (sorted) return series;
  if (length > maxSorted) return undefined;
  const order = Uint32Array.from({ length }, (_, i) => i).sort((a, b) => offsets.at(a) - offsets.at(b));
  const make = (size: number): Float64Array => new Float64Array(size);
  const result = { ...series, values: createPieces(make), offsets: createPieces(make) };
  for (const i of order) {
    result.values.push(values.at(i));
    result.offsets.push(offsets.at(i));
  }
  return result;
}

function failed(issue: IngestIssue): { ok: false; issue: IngestIssue } {
  return { ok: false, issue };
}
