import type { CSSProperties } from "react";
import { Tag } from "../ui/tag";
import { percentOf, spanOf, type Span } from "../ui/scale";
import { CoverBar, type BarKind } from "./bar";

export type CoverNode = {
  key: string;
  depth: number;
  /** The slot, or what stands there. */
  label: string;
  serial?: string | null;
  href?: string;
  bar?: { kind: BarKind; from: string; to: string; words: string } | null;
  /** The part the claim is about. */
  hit?: boolean;
  current?: boolean;
  /** Those that stood here before: "to 22 Sep 2026, RMA-1180". */
  was?: readonly { serial: string; words: string }[];
  /** Alike parts folded under this one line. */
  folded?: readonly CoverNode[];
};

function Line({ node, span }: { node: CoverNode; span: Span }) {
  return (
    <>
      <span className="n">
        {node.depth > 0 ? <i className="elb" aria-hidden="true" /> : null}
        {node.depth > 0 ? <span>{node.label}</span> : <b>{node.label}</b>}
        {node.serial ? <Tag part serial={node.serial} href={node.href} current={node.current} /> : null}
        {node.bar ? <span className="vh">{node.bar.words}</span> : null}
      </span>
      <span className="c" aria-hidden="true">
        {node.bar ? (
          <CoverBar kind={node.bar.kind} from={node.bar.from} to={node.bar.to} span={span} />
        ) : null}
      </span>
    </>
  );
}

function Item({ node, span }: { node: CoverNode; span: Span }) {
  const row = node.hit ? "row hit" : "row";
  return (
    <li style={{ "--d": node.depth } as CSSProperties}>
      {node.folded ? (
        <details>
          <summary className={row}>
            <Line node={node} span={span} />
          </summary>
          <ul>
            {node.folded.map((part) => (
              <Item key={part.key} node={part} span={span} />
            ))}
          </ul>
        </details>
      ) : (
        <div className={row}>
          <Line node={node} span={span} />
        </div>
      )}
      {node.was?.map((old) => (
        <p className="was" key={old.serial}>
          was <s>{old.serial}</s> {old.words}
        </p>
      ))}
    </li>
  );
}

const days = (nodes: readonly CoverNode[]): string[] =>
  nodes.flatMap((n) => [...(n.bar ? [n.bar.from, n.bar.to] : []), ...days(n.folded ?? [])]);

/**
 * The as-built tree with every swap since: slots, tags, and each part's cover on one scale with one
 * today line. The scale reaches over all bars unless `from` and `to` set it.
 */
export function CoverTree({
  nodes,
  todayOn,
  from,
  to,
}: {
  nodes: readonly CoverNode[];
  todayOn: string;
  from?: string;
  to?: string;
}) {
  const around = spanOf([todayOn, ...days(nodes)]);
  const span = { from: from ?? around.from, to: to ?? around.to };
  return (
    <div className="bt">
      <ul>
        {nodes.map((node) => (
          <Item key={node.key} node={node} span={span} />
        ))}
      </ul>
      <div className="vl" aria-hidden="true">
        <i className="vline today" style={{ left: `${percentOf(todayOn, span)}%` }}>
          <i className="flag" />
        </i>
      </div>
    </div>
  );
}
