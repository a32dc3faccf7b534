import type { ReactNode } from 'react';
import { classNames } from './class-names';

export interface RuledColumn<Row> {
  key: string;
  head: string;
  cell: (row: Row) => ReactNode;
  align?: 'left' | 'right';
  /** The cell that names the row; on a narrow screen it stands on a line of its own. */
  lead?: boolean;
  /** On a narrow screen the head is left out where the value speaks for itself. */
  plain?: boolean;
  /** Nothing to say in this row: a dash on wide screens, left out on narrow ones. */
  blank?: (row: Row) => boolean;
  /** CSS width on wide screens. */
  width?: string;
}

interface RuledTableProps<Row> {
  /** Names the table for screen readers. */
  caption: string;
  columns: readonly RuledColumn<Row>[];
  rows: readonly Row[];
  rowKey: (row: Row) => string;
  /** Marks the row the reader is at, or one that waits for them. */
  marked?: (row: Row) => boolean;
}

/**
 * Rows as ruled lines. Below 40 rem each row stacks: the leading cell first, the rest as "head value" under it. The
 * roles are written out because a table whose rows are displayed as blocks loses them in some browsers.
 */
export function RuledTable<Row>({ caption, columns, rows, rowKey, marked }: RuledTableProps<Row>) {
  return (
    <table role="table" className="w-full border-collapse text-left max-sm:block">
      <caption className="sr-only">{caption}</caption>
      <thead role="rowgroup" className="max-sm:sr-only">
        <tr role="row">
          {columns.map((column) => (
            <th key={column.key} role="columnheader" scope="col" style={{ width: column.width }} className={classNames('text-small font-medium text-soft pb-2 pr-5 last:pr-0 border-b border-rule-strong align-bottom', column.align === 'right' && 'text-right')}>
              {column.head}
            </th>
          ))}
        </tr>
      </thead>
      <tbody role="rowgroup" className="max-sm:block max-sm:border-t max-sm:border-rule-strong">
        {rows.map((row) => (
          <tr key={rowKey(row)} role="row" className={classNames('border-b border-rule max-sm:flex max-sm:flex-wrap max-sm:items-baseline max-sm:gap-x-5 max-sm:gap-y-0.5 max-sm:py-2.5', marked?.(row) && 'bg-sheet shadow-none outline-0 [box-shadow:inset_3px_0_0_var(--ink)] sm:[&>td:first-child]:pl-3 max-sm:pl-3')}>
            {columns.map((column) => (
              <td key={column.key} role="cell" className={classNames('align-top sm:py-3 sm:pr-5 last:pr-0 max-sm:text-small', column.align === 'right' && 'sm:text-right', column.lead && 'max-sm:basis-full max-sm:text-body', column.blank?.(row) && 'max-sm:hidden')}>
                {!column.lead && !column.plain && column.head !== '' ? <span aria-hidden className="sm:hidden text-soft">{column.head.toLowerCase()} </span> : null}
                {column.blank?.(row) ? <Blank /> : column.cell(row)}
              </td>
            ))}
          </tr>
        ))}
      </tbody>
    </table>
  );
}

const Blank = () => <span className="text-faint"><span aria-hidden>–</span><span className="sr-only">none</span></span>;
