"use client";
import { generateReactHelpers } from "@uploadthing/react";
import type { FileRouter } from "uploadthing/types";
import { useCallback, useId, useRef, useState } from "react";
import { Progress } from "@/components/ui/progress";
import { showBytes } from "@/lib/base/show";

// The router's own type lives with its route; here an endpoint takes plain text fields.
type Going = {
  pauseUpload: (file?: File) => void;
  resumeUpload: (file?: File) => void;
  done: (file?: File) => Promise<unknown>;
};
type CreateUpload = (
  endpoint: string,
  options: {
    files: File[];
    input: Record<string, string>;
    onUploadProgress: (at: { loaded: number }) => void;
  },
) => Promise<Going>;
const createUpload = generateReactHelpers<FileRouter>().createUpload as unknown as CreateUpload;
const MAX_BYTES = 25_000_000;

type Item = {
  id: string;
  file: File;
  sent: number;
  state: "waiting" | "going" | "paused" | "checking" | "done" | "refused";
  words: string;
  going?: Going;
  begun: number;
};

export type UploaderProps = {
  endpoint: "evidence" | "photo";
  input: Record<string, string>;
  label: string;
  hint: string;
  accept?: string;
  multiple?: boolean;
  /** A plain button, for places that say themselves what is wanted. */
  compact?: boolean;
  /** Told after each file that has arrived. */
  onDone?: () => void;
};

/** SDK words that no person should read, in ours. */
function plain(message: string): string {
  if (/XHR failed|UPLOAD_FAILED|fetch|network|INTERNAL_CLIENT/i.test(message))
    return "The line broke. Carry on, and it goes on from where it was.";
  if (/FileSizeMismatch|too large/i.test(message)) return "It is over 25 MB. Choose a smaller one.";
  if (/InvalidFileType|UnknownFileType/i.test(message))
    return "We take photos, video, sound, PDF and plain text logs.";
  if (/FileCountMismatch/i.test(message)) return "Ten files at once at most.";
  return message.replace(/^.*?:\s*/, "");
}

/**
 * Files to the upload host: several at once, each with its share, a pause that keeps what was sent,
 * and a way to stop. Goes on in the background while the page is read.
 */
export function Uploader({
  endpoint,
  input,
  label,
  hint,
  accept,
  multiple = true,
  compact = false,
  onDone,
}: UploaderProps) {
  const [items, setItems] = useState<Item[]>([]);
  const field = useRef<HTMLInputElement>(null);
  const fieldId = useId();

  const change = useCallback((id: string, part: Partial<Item>) => {
    setItems((list) => list.map((i) => (i.id === id ? { ...i, ...part } : i)));
  }, []);

  const finish = useCallback(
    async (id: string, file: File, going: Going) => {
      try {
        await going.done(file);
        change(id, { state: "done", words: "Sent.", sent: file.size });
        onDone?.();
      } catch (thrown) {
        const words = thrown instanceof Error ? thrown.message : "";
        if (/abort|paused/i.test(words) || (thrown instanceof Error && /Abort/.test(thrown.name))) return;
        change(id, { state: "paused", words: plain(words) });
      }
    },
    [change, onDone],
  );

  const start = useCallback(
    async (item: Item) => {
      change(item.id, { state: "going", words: "" });
      try {
        const going = await createUpload(endpoint, {
          files: [item.file],
          input,
          onUploadProgress: ({ loaded }) =>
            change(item.id, { sent: loaded, state: loaded >= item.file.size ? "checking" : "going" }),
        });
        change(item.id, { going });
        await finish(item.id, item.file, going);
      } catch (thrown) {
        change(item.id, {
          state: "refused",
          words: plain(thrown instanceof Error ? thrown.message : "It was not taken."),
        });
      }
    },
    [change, endpoint, finish, input],
  );

  const choose = (files: FileList | null) => {
    const added = [...(files ?? [])].map((file, n): Item => {
      const id = `${Date.now()}-${n}-${file.name}`;
      const refused =
        file.size === 0
          ? "It is empty. Choose it again."
          : file.size > MAX_BYTES
            ? "Not sent: it is over 25 MB. Choose a smaller one."
            : null;
      return {
        id,
        file,
        sent: 0,
        state: refused ? "refused" : "waiting",
        words: refused ?? "",
        begun: Date.now(),
      };
    });
    setItems((list) => [...list, ...added]);
    for (const item of added) if (item.state === "waiting") void start(item);
    if (field.current) field.current.value = "";
  };

  const pause = (i: Item) => {
    i.going?.pauseUpload(i.file);
    change(i.id, { state: "paused", words: "Paused. What was sent is kept." });
  };
  const resume = (i: Item) => {
    if (!i.going) return void start(i);
    change(i.id, { state: "going", words: "" });
    i.going.resumeUpload(i.file);
    void finish(i.id, i.file, i.going);
  };
  const stop = (i: Item) => {
    i.going?.pauseUpload(i.file);
    setItems((list) => list.filter((x) => x.id !== i.id));
  };

  return (
    <div className={compact ? "uploader compact" : "uploader"}>
      <label className={compact ? "btn line notch" : "addbox notch"} htmlFor={fieldId}>
        {compact ? null : (
          <svg viewBox="0 0 40 32" aria-hidden="true">
            <path d="M2 8h9l3-5h12l3 5h9v21H2z" />
            <circle cx="20" cy="18" r="6.5" />
          </svg>
        )}
        <span>
          {label}
          {compact ? null : <small>{hint}</small>}
        </span>
        <input
          ref={field}
          id={fieldId}
          className="vh"
          type="file"
          multiple={multiple}
          accept={accept}
          onChange={(e) => choose(e.target.files)}
        />
      </label>
      <ul className="ups">
        {items.map((i) => (
          <li className="up" key={i.id} data-state={i.state}>
            <span className="f">{i.file.name}</span>
            <span className="m">{showBytes(i.file.size)}</span>
            {i.state === "going" || i.state === "paused" ? (
              <div className="st">
                <Progress
                  share={i.file.size === 0 ? 0 : Math.min(i.sent, i.file.size) / i.file.size}
                  label={`${i.file.name} sent`}
                  words={
                    i.state === "paused"
                      ? i.words
                      : `${Math.round((100 * Math.min(i.sent, i.file.size)) / Math.max(1, i.file.size))}% sent.`
                  }
                  stop={
                    <>
                      {i.state === "going" ? (
                        <button type="button" className="linklike" onClick={() => pause(i)}>
                          Pause
                        </button>
                      ) : (
                        <button type="button" className="linklike" onClick={() => resume(i)}>
                          Carry on
                        </button>
                      )}{" "}
                      <button type="button" className="linklike" onClick={() => stop(i)}>
                        Stop
                      </button>
                    </>
                  }
                />
              </div>
            ) : null}
            {i.state === "waiting" ? <span className="st">Starting.</span> : null}
            {i.state === "checking" ? <span className="st">All sent, being taken in.</span> : null}
            {i.state === "done" ? (
              <span className="st okk" role="status">
                {i.words}
              </span>
            ) : null}
            {i.state === "refused" ? (
              <span className="st bad" role="alert">
                {i.words}{" "}
                <button
                  type="button"
                  className="linklike"
                  onClick={() => setItems((l) => l.filter((x) => x.id !== i.id))}
                >
                  Take off the list
                </button>
              </span>
            ) : null}
          </li>
        ))}
      </ul>
    </div>
  );
}
