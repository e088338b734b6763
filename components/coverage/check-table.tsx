import { Tag } from "../ui/tag";
import { CoverGlyph, type GlyphState } from "./glyph";

export type CheckRow = {
  line: number;
  given: string;
  serial: string | null;
  isPart: boolean;
  href: string | null;
  modelName: string;
  /** The system and slot it stands in. */
  within: string;
  accountName: string | null;
  glyph: GlyphState;
  words: string;
  lastOn: string | null;
  clause: string | null;
  rma: { number: string; href: string } | null;
  doubts: string[];
  /** Its unit, where a fault of it may be reported from here. */
  unitId: string | null;
};

/**
 * The lines in the order they were given. Roles are named, because a narrow screen lays each row out as
 * a block, and a table laid out otherwise is no table to some readers.
 */
export function CheckTable({
  rows,
  chosen,
  choosable,
  customers,
}: {
  rows: readonly CheckRow[];
  chosen: ReadonlySet<string>;
  choosable: boolean;
  /** Say who bought each: for staff. */
  customers: boolean;
}) {
  const heads = [
    ...(choosable ? ["Choose"] : []),
    "Line",
    "Serial",
    "Model",
    ...(customers ? ["Customer"] : []),
    "Cover",
    "Last covered day",
    "Clause",
    "RMA",
    "Doubt",
  ];
  return (
    <div className="ck-wrap">
      <table className="tbl ck-table" role="table" aria-label="The lines checked">
        <thead role="rowgroup">
          <tr role="row">
            {heads.map((h) => (
              <th key={h} role="columnheader" scope="col" className={h === "Line" ? "num" : undefined}>
                {h === "Choose" ? <span className="vh">{h}</span> : h}
              </th>
            ))}
          </tr>
        </thead>
        <tbody role="rowgroup">
          {rows.map((r, i) => (
            <tr role="row" key={`${r.line}-${i}`} className={r.serial ? undefined : "ck-no"}>
              {choosable ? (
                <td role="cell" className="ck-c">
                  {r.unitId ? (
                    <label className="ck-box">
                      <input
                        type="checkbox"
                        name="units[]"
                        value={r.unitId}
                        className="box"
                        defaultChecked={chosen.has(r.unitId)}
                      />
                      <span className="vh">Choose {r.serial}</span>
                    </label>
                  ) : null}
                </td>
              ) : null}
              <td role="cell" className="num ck-l">
                <span className="vh">Line </span>
                {r.line}
              </td>
              <th role="rowheader" scope="row" className="ck-s">
                {r.serial ? (
                  <Tag serial={r.serial} part={r.isPart} href={r.href ?? undefined} />
                ) : (
                  <span className="m ck-given">{r.given}</span>
                )}
              </th>
              <td role="cell" className="ck-m">
                {r.modelName}
                {r.within ? <span className="q">{r.within}</span> : null}
              </td>
              {customers ? (
                <td role="cell" className="ck-a">
                  {r.accountName}
                </td>
              ) : null}
              <td role="cell" className="ck-g">
                <CoverGlyph state={r.glyph} words={r.words} />
              </td>
              <td role="cell" className="ck-d">
                {r.lastOn ? (
                  <>
                    <span className="ck-lab">last covered day </span>
                    {r.lastOn}
                  </>
                ) : null}
              </td>
              <td role="cell" className="m ck-k">
                {r.clause ? (
                  <>
                    <span className="ck-lab">clause </span>
                    {r.clause}
                  </>
                ) : null}
              </td>
              <td role="cell" className="ck-r">
                {r.rma ? (
                  <a className="m" href={r.rma.href}>
                    {r.rma.number}
                  </a>
                ) : null}
              </td>
              <td role="cell" className="ck-w">
                {r.doubts.map((d) => (
                  <span key={d}>{d}</span>
                ))}
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}
