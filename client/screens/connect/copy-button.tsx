import { useEffect, useState } from 'react';
import { setStringAsync } from 'expo-clipboard';
import { Button } from '@/client/components/button';

const saidMs = 2_500;

/** Copies and says so; where the browser refuses, says that the text must be marked by hand. */
export function CopyButton({ label, text, main }: { label: string; text: string; main?: boolean }) {
  const [said, setSaid] = useState<'copied' | 'refused' | null>(null);
  useEffect(() => {
    if (said === null) return undefined;
    const timer = setTimeout(() => setSaid(null), saidMs);
    return () => clearTimeout(timer);
  }, [said]);
  const copy = async () => {
    const done = await setStringAsync(text).catch(() => false);
    setSaid(done ? 'copied' : 'refused');
  };
  const shown =
    said === 'copied' ? 'Copied' : said === 'refused' ? 'Mark the text and copy it by hand' : label;
  return (
    <Button
      label={shown}
      icon={said === 'copied' ? 'check' : 'copy'}
      kind={main ? 'filled' : 'outlined'}
      onPress={() => void copy()}
    />
  );
}
