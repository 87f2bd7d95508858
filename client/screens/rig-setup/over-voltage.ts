/** What to do where the sensor's supply is above what the input takes, else null. Unknown or no numbers: null. */
export function overVoltage(supplyV: number | null, maxInputV: number | null): string | null {
  if (supplyV === null || maxInputV === null || !(supplyV > maxInputV)) return null;
  return (
    `The sensor runs on ${supplyV} V and the input takes ${maxInputV} V: this can destroy the board. ` +
    'Put a divider or a level shifter between them before you connect.'
  );
}
