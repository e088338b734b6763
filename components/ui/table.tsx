import type { ReactNode } from "react";

export type Column<Row> = {
  key: string;
  head: ReactNode;
  /** A figure: mono, right-aligned. */
  num?: boolean;
  cell: (row: Row) => ReactNode;
};

/**
 * Heads over an ink rule, hairlines between rows, figures right. The first column names the row.
 * It scrolls in its own frame where it is wider than the page.
 */
export function Table<Row>({
  columns,
  rows,
  rowKey,
  caption,
  current,
}: {
  columns: readonly Column<Row>[];
  rows: readonly Row[];
  rowKey: (row: Row) => string;
  caption: string;
  current?: (row: Row) => boolean;
}) {
  return (
    <div className="tblwrap" role="region" aria-label={caption} tabIndex={0}>
      <table className="tbl">
        <caption className="vh">{caption}</caption>
        <thead>
          <tr>
            {columns.map((c) => (
              <th key={c.key} scope="col" className={c.num ? "num" : undefined}>
                {c.head}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={rowKey(row)} aria-current={current?.(row) ? "true" : undefined}>
              {columns.map((c, i) =>
                i === 0 ? (
                  <th key={c.key} scope="row" className={c.num ? "num" : undefined}>
                    {c.cell(row)}
                  </th>
                ) : (
                  <td key={c.key} className={c.num ? "num" : undefined}>
                    {c.cell(row)}
                  </td>
                ),
              )}
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}
