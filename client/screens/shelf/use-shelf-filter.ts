import { useEffect, useState } from 'react';
import { useLocalSearchParams, useRouter } from 'expo-router';
import type { CaptureFilter } from '@/client/data/captures';
import { findingCodes, type FindingCode } from '@/signal/model';

const waitMs = 300;

/** The filter stands in the address: going back from a replay brings it again, and it can be sent to others. */
export function useShelfFilter() {
  const params = useLocalSearchParams<Record<string, string>>();
  const router = useRouter();
  const filter: CaptureFilter = {
    rigId: params.rig || undefined,
    tag: params.tag || undefined,
    finding: findingCodes.find((code) => code === params.finding),
    text: params.q || undefined,
  };
  const [typed, setTyped] = useState(filter.text ?? '');
  const set = (change: { rig?: string; tag?: string; finding?: FindingCode | ''; q?: string }) => {
    const all = { rig: filter.rigId, tag: filter.tag, finding: filter.finding, q: filter.text, ...change };
    // An empty string would stay in the address; undefined takes it out.
    router.setParams(
      Object.fromEntries(Object.entries(all).map(([name, value]) => [name, value || undefined])) as object,
    );
  };
  const text = filter.text ?? '';
  useEffect(() => {
    if (typed.trim() === text) return undefined;
    const timer = setTimeout(() => router.setParams({ q: typed.trim() || undefined } as object), waitMs);
    return () => clearTimeout(timer);
  }, [typed, text, router]);
  const clear = () => {
    setTyped('');
    set({ rig: '', tag: '', finding: '', q: '' });
  };
  const active = Boolean(filter.rigId || filter.tag || filter.finding || filter.text);
  return { filter, typed, setTyped, set, clear, active };
}

export type ShelfFilter = ReturnType<typeof useShelfFilter>;
