"use client";
import { useRouter } from "next/navigation";
import { useCallback, useEffect, useRef, useState, useTransition } from "react";
import { PhotoSlot } from "@/components/evidence/photo-slot";
import { Uploader } from "@/components/evidence/uploader";
import { Button } from "@/components/ui/button";
import { CautionStrip } from "@/components/ui/caution-strip";
import { Empty } from "@/components/ui/empty";
import { Pin } from "@/components/ui/pin";
import { Tag } from "@/components/ui/tag";
import type { PhotoView, ReceiptView, ScanAnswer } from "@/lib/dock/queries";
import { photosNeeded } from "@/lib/dock/rules";
import { PHOTO_SLOT_WORDS, RECEIVED_CONDITIONS, type ReceivedCondition } from "@/lib/dock/schema";
import { cautionsFor } from "@/lib/rma/rules";
import type { RmaView } from "@/lib/rma/schema";
import { lineFacts, look, putAside, takeIn } from "./actions";
import { sound } from "./sound";
import { Stop } from "./stop";

export type Expected = {
  rmaId: string;
  number: string;
  serial: string;
  more: number;
  when: string;
  late: boolean;
  detail: string;
};
type Aside = {
  id: string;
  scanned: string;
  expected: string | null;
  place: string;
  rmaNumber: string | null;
};
type Facts = { photos: Record<string, PhotoView[]>; receipts: Record<string, ReceiptView> };
type Wrong = Extract<ScanAnswer, { kind: "wrong" }>;

const CONDITION_WORDS: Record<ReceivedCondition, string> = {
  good: "as it should be",
  packaging_poor: "poorly packed",
  damaged: "damaged",
  incomplete: "not complete",
};
/** The same code again this soon is the scanner's second look, not a second part. */
const SAME_CODE_MS = 2000;

/** The dock for a scanner and gloved hands: scan, answer, photos, bay, taken in. */
export function Station({ expected, aside }: { expected: Expected[]; aside: Aside[] }) {
  const router = useRouter();
  const field = useRef<HTMLInputElement>(null);
  const last = useRef<{ text: string; at: number }>({ text: "", at: 0 });
  const [rma, setRma] = useState<RmaView | null>(null);
  const [lineId, setLineId] = useState<string | null>(null);
  const [scanned, setScanned] = useState("");
  const [wrong, setWrong] = useState<Wrong | null>(null);
  const [unexpected, setUnexpected] = useState<Extract<ScanAnswer, { kind: "unexpected" }> | null>(null);
  const [say, setSay] = useState("ready for the next scan");
  const [problem, setProblem] = useState("");
  const [place, setPlace] = useState("");
  const [condition, setCondition] = useState<ReceivedCondition>("good");
  const [facts, setFacts] = useState<Facts>({ photos: {}, receipts: {} });
  const [clientId, setClientId] = useState("");
  const [busy, start] = useTransition();

  const focus = useCallback(() => field.current?.focus(), []);
  useEffect(() => {
    focus();
  }, [focus, rma, lineId, wrong, say]);

  const refresh = useCallback(async (of: RmaView | null) => {
    if (of) setFacts(await lineFacts(of.lines.map((l) => l.id)));
  }, []);

  const onScan = useCallback(
    (raw: string) => {
      const text = raw.trim();
      if (text === "") return;
      const at = Date.now();
      if (last.current.text === text && at - last.current.at < SAME_CODE_MS) return;
      last.current = { text, at };
      start(async () => {
        setProblem("");
        setUnexpected(null);
        const answer = await look(text, rma?.id ?? null).catch(() => null);
        if (!answer) {
          sound("warn");
          return setProblem(
            "The line to the server is down. Nothing was booked; scan again when it is back.",
          );
        }
        switch (answer.kind) {
          case "rma":
            sound("right");
            setRma(answer.rma);
            setLineId(null);
            setScanned("");
            setSay(`${answer.rma.number}: now scan the serial`);
            return refresh(answer.rma);
          case "right":
          case "again":
            sound(answer.kind === "right" ? "right" : "warn");
            setRma(answer.rma);
            setLineId(answer.lineId);
            setScanned(text);
            setClientId(crypto.randomUUID());
            setPlace("");
            setCondition("good");
            setSay(answer.kind === "right" ? "right serial" : "taken in already");
            return refresh(answer.rma);
          case "wrong":
            sound("stop");
            return setWrong(answer);
          case "place":
            sound("right");
            setPlace(answer.place);
            return setSay(`bay ${answer.place}`);
          case "unexpected":
            sound("warn");
            setSay("no RMA for this");
            setClientId(crypto.randomUUID());
            return setUnexpected(answer);
          case "unreadable":
          case "refused":
            sound("warn");
            return setProblem(answer.why);
        }
      });
    },
    [rma, refresh],
  );

  const checking = Object.values(facts.photos).some((list) => list.some((p) => p.state === "quarantined"));
  useEffect(() => {
    if (!checking) return;
    const later = setInterval(() => void refresh(rma), 1500);
    return () => clearInterval(later);
  }, [checking, refresh, rma]);

  const again = useCallback((words: string) => {
    setWrong(null);
    setUnexpected(null);
    setSay(words);
    last.current = { text: "", at: 0 };
  }, []);

  const aside_ = useCallback(
    (
      text: string,
      of: { rmaId: string | null; expected: string | null; kind: "wrong_unit" | "no_rma" | "unknown_serial" },
    ) => {
      start(async () => {
        const done = await putAside({
          scanned: text,
          rmaId: of.rmaId,
          expected: of.expected,
          kind: of.kind,
          place: "Q-2",
          clientId: crypto.randomUUID(),
        });
        again(done.ok ? `${text} set aside in Q-2, the desk is told` : "ready for the next scan");
        if (!done.ok) setProblem(done.refusal.message);
        router.refresh();
      });
    },
    [again, router],
  );

  if (wrong) {
    return (
      <Stop
        wrong={wrong}
        again={() => again("scan the label again")}
        byHand={() => again("type it, then Enter")}
        aside={() =>
          aside_(wrong.scanned, { rmaId: wrong.rma.id, expected: wrong.verdict.expected, kind: "wrong_unit" })
        }
        busy={busy}
      />
    );
  }

  const line = rma?.lines.find((l) => l.id === lineId) ?? null;
  const receipt = line ? facts.receipts[line.id] : undefined;
  const photos = line ? (facts.photos[line.id] ?? []) : [];
  const needed = line ? photosNeeded(line.family, condition) : [];
  const missing = needed.filter((s) => !photos.some((p) => p.slot === s));
  const reason = !line
    ? "Needs a scan first"
    : receipt
      ? `Taken in, at ${receipt.place}`
      : missing.length > 0
        ? `Photo first: ${PHOTO_SLOT_WORDS[missing[0]!].toLowerCase()}`
        : place === ""
          ? "Scan or type the bay"
          : undefined;
  const here = expected.filter((e) => e.rmaId === rma?.id).length;

  const takeItIn = () => {
    if (!line) return;
    start(async () => {
      const done = await takeIn({ lineId: line.id, scanned, place, condition, note: "", clientId });
      if (!done.ok) {
        sound("warn");
        return setProblem(done.refusal.message);
      }
      sound("right");
      setSay(`${line.serial} is in, bay ${place}`);
      await refresh(rma);
      router.refresh();
    });
  };

  return (
    <main className="dock" id="main">
      <h1 className="vh">Dock</h1>
      <form
        className="bigscan notch"
        onSubmit={(e) => {
          e.preventDefault();
          const input = field.current;
          if (!input) return;
          const text = input.value;
          input.value = "";
          onScan(text);
        }}
      >
        <svg viewBox="0 0 58 44" aria-hidden="true">
          <path d="M0 2h4v40H0zM7 2h2v40H7zM12 2h6v40h-6zM21 2h2v40h-2zM26 2h2v40h-2zM31 2h5v40h-5zM39 2h2v40h-2zM44 2h6v40h-6zM53 2h2v40h-2zM57 2h1v40h-1z" />
        </svg>
        <label className="vh" htmlFor="scan">
          Scan an RMA, a serial or a bay
        </label>
        <input
          id="scan"
          ref={field}
          name="scan"
          autoComplete="off"
          autoCapitalize="characters"
          spellCheck={false}
          placeholder={scanned || "scan"}
          className={scanned ? "last" : undefined}
          enterKeyHint="go"
        />
        <span className="ph" role="status" aria-live="polite">
          {busy ? "looking" : say}
        </span>
      </form>
      {problem ? (
        <p className="esum notch dock-problem" role="alert">
          <b>{problem}</b>
        </p>
      ) : null}
      <section className="exp" aria-labelledby="exp-h">
        <div className="exphead">
          <h2 id="exp-h">Expected</h2>
          <span className="q">{expected.length === 0 ? "" : `${here} of ${expected.length} here`}</span>
        </div>
        {expected.length === 0 ? (
          <Empty title="No parcel is announced.">A parcel appears here when an RMA is authorized.</Empty>
        ) : null}
        <ol>
          {expected.map((e) => (
            <li
              key={e.rmaId}
              className={e.rmaId === rma?.id ? "it on" : "it"}
              aria-current={e.rmaId === rma?.id ? "true" : undefined}
            >
              {e.rmaId === rma?.id ? <Pin size={22} /> : null}
              <Tag serial={e.serial} />
              <span className={e.late ? "t late" : "t"}>{e.when}</span>
              <span className="d">
                <span className="m">{e.number}</span>, {e.detail}
                {e.more > 0 ? `, and ${e.more} more` : ""}
              </span>
            </li>
          ))}
        </ol>
        {aside.length > 0 ? (
          <>
            <h2 className="asidehead">Set aside</h2>
            <ul className="asidelist">
              {aside.map((a) => (
                <li key={a.id}>
                  <span className="m">{a.scanned}</span> in <span className="m">{a.place}</span>
                  {a.rmaNumber ? `, came for ${a.rmaNumber}` : ""}
                </li>
              ))}
            </ul>
          </>
        ) : null}
      </section>
      <section className="res" aria-label="This parcel">
        {unexpected ? (
          <div className="warnplate notch" role="alert">
            <p className="t">No RMA for {unexpected.scanned}.</p>
            <p className="d">
              {unexpected.known
                ? `We know it: ${unexpected.known.modelName}${unexpected.known.accountName ? `, sold to ${unexpected.known.accountName}` : ""}.`
                : "This serial is not in our ledger."}{" "}
              Look for an RMA number on the box. Nothing was booked.
            </p>
            <div className="acts">
              <Button huge kind="ink" type="button" onClick={() => again("scan the RMA on the box")}>
                Scan the RMA on the box
              </Button>
              <Button
                huge
                kind="line"
                type="button"
                onClick={() =>
                  aside_(unexpected.scanned, {
                    rmaId: null,
                    expected: null,
                    kind: unexpected.known ? "no_rma" : "unknown_serial",
                  })
                }
              >
                Set aside in Q-2
              </Button>
            </div>
          </div>
        ) : null}
        {!rma && !unexpected ? (
          <Empty title="Scan the RMA on the box, or a serial.">
            The answer stands here, with what to do.
          </Empty>
        ) : null}
        {rma && !line ? (
          <>
            <h2>
              <span className="m">{rma.number}</span>, {rma.accountName}
            </h2>
            <ul className="linelist">
              {rma.lines.map((l) => (
                <li key={l.id}>
                  <Tag serial={l.serial} big />
                  <span>
                    {l.slot ?? l.modelName}
                    {facts.receipts[l.id]
                      ? `, in since, bay ${facts.receipts[l.id]!.place}`
                      : ", to be scanned"}
                  </span>
                </li>
              ))}
            </ul>
            <CautionStrip items={cautionsFor(rma.lines).slice(0, 3)} label="Hazards" />
          </>
        ) : null}
        {rma && line ? (
          <>
            <div className="good" role="status">
              <svg viewBox="0 0 76 76" aria-hidden="true">
                <path d="M10 40 30 60 67 17" />
              </svg>
              <div>
                <div className="t">{receipt ? "It is in already." : "Right unit. Take it in."}</div>
                <div className="d">
                  <span className="m">{line.serial}</span> matches <span className="m">{rma.number}</span>
                  {line.systemSerial ? (
                    <>
                      , {line.slot} of <span className="m">{line.systemSerial}</span>
                    </>
                  ) : null}
                  .
                  {rma.lines.length > 1
                    ? ` ${rma.lines.filter((l) => l.state === "open" && !facts.receipts[l.id]).length} of ${rma.lines.length} still to come.`
                    : ""}
                </div>
              </div>
            </div>
            <CautionStrip items={cautionsFor([line]).slice(0, 3)} label="Hazards" />
            <div className="sec">
              <h2>Photos</h2>
              <span className="q">
                {needed.length - missing.length} of {needed.length} needed before it moves
              </span>
            </div>
            <div className="slots">
              {[...needed, ...(condition === "damaged" ? [] : (["damage"] as const))].map((slot) => {
                const photo = photos.findLast((p) => p.slot === slot);
                if (photo)
                  return (
                    <PhotoSlot
                      key={slot}
                      state="taken"
                      label={PHOTO_SLOT_WORDS[slot]}
                      src={photo.state === "clean" ? `/files/${photo.fileId}` : undefined}
                      caption={`${PHOTO_SLOT_WORDS[slot]}${photo.state === "rejected" ? ", not a picture: take it again" : photo.state === "clean" ? "" : ", being checked"}`}
                    />
                  );
                return (
                  <PhotoSlot
                    key={slot}
                    state={missing[0] === slot ? "asked" : "wanted"}
                    label={PHOTO_SLOT_WORDS[slot]}
                    detail={needed.includes(slot) ? "needed" : "if there is any"}
                  >
                    <Uploader
                      compact
                      endpoint="photo"
                      input={{ subject: "receipt_line", subjectId: line.id, slot }}
                      label="Take the photo"
                      hint="Camera or file"
                      accept="image/*"
                      multiple={false}
                      onDone={() => void refresh(rma)}
                    />
                  </PhotoSlot>
                );
              })}
            </div>
            {receipt ? null : (
              <div className="dockfields">
                <div className="field">
                  <label htmlFor="place">Bay</label>
                  <input
                    id="place"
                    className="in m"
                    value={place}
                    onChange={(e) => setPlace(e.target.value.toUpperCase())}
                    placeholder="B-14"
                    autoComplete="off"
                  />
                </div>
                <div className="field">
                  <label htmlFor="condition">It is</label>
                  <select
                    id="condition"
                    className="in"
                    value={condition}
                    onChange={(e) => setCondition(e.target.value as ReceivedCondition)}
                  >
                    {RECEIVED_CONDITIONS.map((c) => (
                      <option key={c} value={c}>
                        {CONDITION_WORDS[c]}
                      </option>
                    ))}
                  </select>
                </div>
              </div>
            )}
            <div className="acts">
              <Button
                huge
                type="button"
                reason={reason}
                aria-disabled={busy}
                onClick={takeItIn}
                className="grow"
              >
                Take it in, bay {place}
              </Button>
              <Button
                huge
                kind="line"
                type="button"
                onClick={() => {
                  setRma(null);
                  setLineId(null);
                  setScanned("");
                  setSay("ready for the next scan");
                }}
              >
                Next parcel
              </Button>
            </div>
          </>
        ) : null}
      </section>
    </main>
  );
}
