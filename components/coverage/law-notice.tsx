import { LAW_CAUTION, type LawNotice } from "@/lib/coverage/law";

/** Rights by law, beside the terms: an aside that warns and does not decide. */
export function LawAside({ notice, staff }: { notice: LawNotice; staff?: boolean }) {
  return (
    <aside className="lawaside" aria-label="Rights by law">
      <h2>{notice.title}</h2>
      <p>{notice.words}</p>
      <p className="q">{LAW_CAUTION}</p>
      {staff ? <p className="q s">Source: {notice.source}</p> : null}
    </aside>
  );
}
