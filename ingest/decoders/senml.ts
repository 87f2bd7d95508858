/** SenML (RFC 8428) as records: the fields of one record, and how base fields resolve. */
import type { IngestIssue } from '../block';
import { invalid, quoted } from './result';

/** One record as written, by the labels of RFC 8428 table 1. */
export type SenmlRecord = {
  bn?: string;
  bt?: number;
  bu?: string;
  bv?: number;
  bs?: number;
  bver?: number;
  n?: string;
  u?: string;
  v?: number;
  vs?: string;
  vb?: boolean;
  vd?: string | Uint8Array;
  s?: number;
  t?: number;
  ut?: number;
};

export type SenmlKind = 'text' | 'number' | 'boolean' | 'data';
export const senmlFields: Record<keyof SenmlRecord, SenmlKind> = {
  bn: 'text',
  bt: 'number',
  bu: 'text',
  bv: 'number',
  bs: 'number',
  bver: 'number',
  n: 'text',
  u: 'text',
  v: 'number',
  vs: 'text',
  vb: 'boolean',
  vd: 'data',
  s: 'number',
  t: 'number',
  ut: 'number',
};

/** RFC 8428 section 6, table 4. */
export const senmlCborLabels: ReadonlyMap<number, keyof SenmlRecord> = new Map([
  [-1, 'bver'],
  [-2, 'bn'],
  [-3, 'bt'],
  [-4, 'bu'],
  [-5, 'bv'],
  [-6, 'bs'],
  [0, 'n'],
  [1, 'u'],
  [2, 'v'],
  [3, 'vs'],
  [4, 'vb'],
  [5, 's'],
  [6, 't'],
  [7, 'ut'],
  [8, 'vd'],
] as const);

/** One resolved record (section 4.6). `timeS` is Unix time. */
export type SenmlMeasurement = {
  name: string;
  /** The name after the base name. */
  label: string;
  unit: string | undefined;
  timeS: number;
  value: number | string | boolean | Uint8Array | undefined;
  sum: number | undefined;
  updateTimeS: number | undefined;
};

/** The base fields in force, carried from record to record. */
export type SenmlBase = {
  name: string;
  timeS: number;
  unit: string | undefined;
  value: number | undefined;
  sum: number | undefined;
};

export function createSenmlBase(): SenmlBase {
  return { name: '', timeS: 0, unit: undefined, value: undefined, sum: undefined };
}

/** Version that this reads (section 4.1); the RFC's own examples carry 5. */
const version = 10;
const firstAbsoluteS = 2 ** 28;

/** Section 4.5.3: below 2^28 relative to now, else Unix time. Seconds. */
export function absoluteTimeS(totalS: number, nowS: number): number {
  return totalS < firstAbsoluteS ? nowS + totalS : totalS;
}

/** Takes the base fields of a record into `base`; gives what is wrong with them. */
export function applyBase(record: SenmlRecord, base: SenmlBase, where: string): IngestIssue | undefined {
  if (
    record.bver !== undefined &&
    !(Number.isInteger(record.bver) && record.bver > 0 && record.bver <= version)
  )
    return invalid(
      `SenML version ${record.bver} is not one that can be read (1 to ${version}).`,
      where + '/bver',
    );
  if (record.bn !== undefined) base.name = record.bn;
  if (record.bt !== undefined) base.timeS = record.bt;
  if (record.bu !== undefined) base.unit = record.bu;
  if (record.bv !== undefined) base.value = record.bv;
  if (record.bs !== undefined) base.sum = record.bs;
  return undefined;
}

const nameRule = /^[A-Za-z0-9][-A-Za-z0-9:./_]*$/;

/**
 * What is wrong with a record as a measurement; `false` where it is none (it carries base fields only).
 * Sections 4.2 and 4.5.1.
 */
export function measurementFault(
  record: SenmlRecord,
  base: SenmlBase,
  where: string,
): IngestIssue | false | undefined {
  const values =
    Number(record.v !== undefined) +
    Number(record.vs !== undefined) +
    Number(record.vb !== undefined) +
    Number(record.vd !== undefined);
  if (values > 1) return invalid('A record has more than one value.', where);
  if (values === 0 && record.s === undefined) {
    const bare = record.n === undefined && record.t === undefined && record.u === undefined;
    if (bare) return false;
    if (base.value === undefined) return invalid('A record has no value.', where);
  }
  const name = base.name + (record.n ?? '');
  if (!nameRule.test(name)) {
    const detail = `The name ${quoted(name)} must begin with a letter or digit and hold only those and - : . / _.`;
    return invalid(detail, where + '/n');
  }
  return undefined;
}

/** Resolves a whole pack: base fields applied, times absolute, in order of time. `nowS` is Unix time. */
export function resolveSenml(
  records: SenmlRecord[],
  nowS: number,
): { ok: true; measurements: SenmlMeasurement[] } | { ok: false; issue: IngestIssue } {
  const base = createSenmlBase();
  const measurements: SenmlMeasurement[] = [];
  for (const [i, record] of records.entries()) {
    const issue = applyBase(record, base, `/${i}`) ?? measurementFault(record, base, `/${i}`);
    if (issue) return { ok: false, issue };
    if (issue === false) continue;
    const plain = record.vs ?? record.vb ?? record.vd;
    const hasNumber = record.v !== undefined || (plain === undefined && record.s === undefined);
    measurements.push({
      name: base.name + (record.n ?? ''),
      label: record.n ?? '',
      unit: record.u ?? base.unit,
      timeS: absoluteTimeS(base.timeS + (record.t ?? 0), nowS),
      value: plain ?? (hasNumber ? (base.value ?? 0) + (record.v ?? 0) : undefined),
      sum: record.s === undefined && base.sum === undefined ? undefined : (base.sum ?? 0) + (record.s ?? 0),
      updateTimeS: record.ut,
    });
  }
  measurements.sort((a, b) => a.timeS - b.timeS);
  return { ok: true, measurements };
}
