import { createElement } from 'react';
import type { CSSProperties, ReactNode } from 'react';
import { ScrollView, View } from 'react-native';
import { Text } from '@/client/components/text';
import { space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

export type Column<R> = {
  title: string;
  cell: (row: R) => ReactNode;
  /** Numbers stand right. */
  numeric?: boolean;
};

type TableProps<R> = {
  /** Spoken name of the table. */
  label: string;
  columns: readonly Column<R>[];
  rows: readonly R[];
  keyOf: (row: R, index: number) => string;
  dense?: boolean;
  /** The name is written above it too: where several stand under each other. */
  titled?: boolean;
};

/** A table of the page's own kind, so that screen readers can walk it; scrolls sideways where it must. */
export function Table<R>({ label, columns, rows, keyOf, dense, titled }: TableProps<R>) {
  const colours = useColours();
  const cell = (numeric: boolean | undefined): CSSProperties => ({
    textAlign: numeric ? 'right' : 'left',
    padding: `${dense ? space.xs : space.m}px ${space.m}px`,
    borderBottom: `1px solid ${colours.hairline}`,
    verticalAlign: 'middle',
  });
  const head = columns.map((c) =>
    createElement(
      'th',
      { key: c.title, scope: 'col', style: cell(c.numeric) },
      <Text size="small" tone="scribeSoft">
        {c.title}
      </Text>,
    ),
  );
  const body = rows.map((row, i) =>
    createElement(
      'tr',
      { key: keyOf(row, i) },
      columns.map((c) => createElement('td', { key: c.title, style: cell(c.numeric) }, wrapped(c.cell(row)))),
    ),
  );
  const table = (
    <ScrollView
      horizontal
      style={{ flexGrow: 0 }}
      contentContainerStyle={{ minWidth: '100%' }}
      tabIndex={0}
      {...({ 'aria-label': label, role: 'region' } as object)}
    >
      {createElement(
        'table',
        { 'aria-label': label, style: { borderCollapse: 'collapse', width: '100%' } },
        createElement('thead', null, createElement('tr', null, head)),
        createElement('tbody', null, body),
      )}
    </ScrollView>
  );
  if (!titled) return table;
  return (
    <View style={{ gap: space.xs }}>
      <Text heading={3} weight="medium">
        {label}
      </Text>
      {table}
    </View>
  );
}

function wrapped(content: ReactNode): ReactNode {
  if (typeof content !== 'string' && typeof content !== 'number') return content;
  return (
    <Text size="small" figures>
      {content}
    </Text>
  );
}
