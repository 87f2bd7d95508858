import { IconButton } from '@/client/components/icon-button';
import { Segmented } from '@/client/components/segmented';
import { setScheme, usePreferences, useTheme } from '@/client/theme/use-theme';

/** One press on Watch: sunlight asks for steel, a dark bench for dye. */
export function SchemeSwitch() {
  const { scheme } = useTheme();
  const other = scheme === 'steel' ? 'dye' : 'steel';
  return (
    <IconButton
      icon={scheme === 'steel' ? 'moon' : 'sun'}
      label={other === 'dye' ? 'Dark scheme' : 'Light scheme'}
      onPress={() => setScheme(other)}
    />
  );
}

/** On the account page: follow the system, or fix one. */
export function SchemeChoice() {
  return (
    <Segmented
      label="Scheme"
      value={usePreferences().scheme}
      onChange={setScheme}
      options={[
        { value: 'system', label: 'As the system' },
        { value: 'steel', label: 'Light' },
        { value: 'dye', label: 'Dark' },
      ]}
    />
  );
}
