/**
 * Field at a linear sensor from its voltage. A ratiometric one rests at half its supply, and its sensitivity goes with the
 * supply: V = Vcc/2 + S (Vcc / Vn) B, S the sensitivity at the nominal supply Vn. One whose rest voltage is given rests
 * there, whatever the supply. 1 T = 10 000 G, so 1 mV/G = 10 mV/mT.
 * Source: notes of Hall sensor makers (brands withheld).
 */
import { got, notPositive, refused, type Outcome } from '@/signal/statistics/issue';

export type LinearSensor = {
  /** At the nominal supply, mV/mT; negative where the output falls towards a south pole. */
  sensitivityMvPerMt: number;
  /** Supply that the sensitivity is stated for, V; null: the one in force, nothing is scaled. */
  nominalSupplyV: number | null;
  /** Supply in force, V; null: not known. */
  supplyV: number | null;
  /** Output without field, V; null: half the supply. */
  quiescentV: number | null;
};

export type FieldScale = {
  /** Output without field, V, and volts per millitesla, as they are at the supply in force. */
  quiescentV: number;
  voltsPerMt: number;
};

/** Issues: bad-setting (no sensitivity; a supply that is needed is not known or not above 0). */
export function fieldScale({
  sensitivityMvPerMt,
  nominalSupplyV,
  supplyV,
  quiescentV,
}: LinearSensor): Outcome<FieldScale> {
  if (notPositive(Math.abs(sensitivityMvPerMt), 'sensitivity'))
    return refused('bad-setting', `sensitivity ${sensitivityMvPerMt} mV/mT`);
  if (quiescentV !== null && !Number.isFinite(quiescentV))
    return refused('bad-setting', `rest voltage ${quiescentV} V`);
  const needsSupply = quiescentV === null || nominalSupplyV !== null;
  const bad =
    (needsSupply ? notPositive(supplyV ?? NaN, 'supply') : null) ??
    (nominalSupplyV === null ? null : notPositive(nominalSupplyV, 'nominal supply'));
  if (bad) return bad;
  const ratio = nominalSupplyV === null ? 1 : supplyV! / nominalSupplyV;
  return got({ quiescentV: quiescentV ?? supplyV! / 2, voltsPerMt: (sensitivityMvPerMt / 1000) * ratio });
}

/** Output of the sensor in a field of `millitesla`, V; a reference for check values. */
export function voltsOf(millitesla: number, scale: FieldScale): number {
  return scale.quiescentV + millitesla * scale.voltsPerMt;
}

/** Field of a swing or a margin: a difference, in which the rest voltage falls out. Never negative for a swing above 0. */
export function milliteslaOfSwing(volts: number, scale: FieldScale): number {
  return volts / Math.abs(scale.voltsPerMt);
}

/** Sensitivity as sheets in gauss state it, mV/G, in mV/mT; a reference for check values. */
export function mvPerMtOfMvPerGauss(mvPerGauss: number): number {
  return 10 * mvPerGauss;
}

/**
 * What is left of a magnet's remanence `aboveK` kelvin above the temperature that it is stated for, as a factor; a
 * reference for check values.
 * @param percentPerK its temperature coefficient: about -0.11 for sintered neodymium, -0.04 samarium cobalt, -0.2 ferrite.
 * Issues: undetermined (the straight line has run out: nothing or less would be left).
 */
export function remanenceFactor(percentPerK: number, aboveK: number): Outcome<number> {
  const factor = (100 + percentPerK * aboveK) / 100;
  return Number.isFinite(factor) && factor > 0
    ? got(factor)
    : refused('undetermined', `${percentPerK} % a kelvin over ${aboveK} K leaves a factor of ${factor}`);
}
