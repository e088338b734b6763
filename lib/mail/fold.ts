/**
 * Folds what a reply repeats. Nothing is ever deleted: a fold is a range of lines that a screen
 * may open. Hiding a customer's words is worse than showing a quote, so in doubt a line stays.
 * Every step is linear in the text.
 */
export type Fold = [from: number, to: number];

const MAX_CHARS = 64_000;
const MAX_LINES = 2_000;

// How mail programs introduce a quote, by language. Matched as plain words at a line's end.
const WROTE = [
  "wrote",
  "writes", // English
  "schrieb",
  "hat geschrieben", // German
  "a écrit", // French
  "escribió",
  "ha escrito", // Spanish
  "ha scritto",
  "scrisse", // Italian
  "schreef",
  "geschreven", // Dutch
  "escreveu", // Portuguese
  "skrev", // Danish, Norwegian, Swedish
  "kirjoitti", // Finnish
  "napisał",
  "napisała",
  "napisał(a)", // Polish
  "napsal",
  "napsala",
  "napsal(a)",
  "napísal",
  "napísal(a)", // Czech, Slovak
  "написал",
  "написала",
  "пишет",
  "написав", // Russian, Ukrainian
  "yazdı",
  "şunu yazdı", // Turkish
  "írta", // Hungarian
  "a scris", // Romanian
  "έγραψε", // Greek
  "のメール",
  "書きました",
  "wrote", // Japanese
  "写道",
  "寫道", // Chinese
  "작성",
  "님이 작성", // Korean
];

const HEADER_WORDS = new Set([
  "from",
  "sent",
  "to",
  "cc",
  "subject",
  "date",
  "reply-to",
  "von",
  "gesendet",
  "an",
  "betreff",
  "datum",
  "kopie",
  "de",
  "envoyé",
  "à",
  "objet",
  "date",
  "envoyé le",
  "enviado",
  "para",
  "asunto",
  "fecha",
  "assunto",
  "data",
  "enviada em",
  "da",
  "inviato",
  "a",
  "oggetto",
  "van",
  "verzonden",
  "aan",
  "onderwerp",
  "fra",
  "sendt",
  "til",
  "emne",
  "dato",
  "från",
  "skickat",
  "till",
  "ämne",
  "lähettäjä",
  "lähetetty",
  "vastaanottaja",
  "aihe",
  "od",
  "wysłano",
  "do",
  "temat",
  "odesláno",
  "komu",
  "předmět",
  "odesílatel",
  "от",
  "отправлено",
  "кому",
  "тема",
  "дата",
  "kimden",
  "gönderildi",
  "kime",
  "konu",
  "feladó",
  "elküldve",
  "címzett",
  "tárgy",
  "差出人",
  "送信日時",
  "宛先",
  "件名",
  "发件人",
  "发送时间",
  "收件人",
  "主题",
  "보낸 사람",
  "보낸 날짜",
  "받는 사람",
  "제목",
]);

const FORWARDED = [
  "original message",
  "forwarded message",
  "begin forwarded message",
  "original-nachricht",
  "ursprüngliche nachricht",
  "weitergeleitete nachricht",
  "message d'origine",
  "message transféré",
  "mensaje original",
  "mensaje reenviado",
  "mensagem original",
  "mensagem encaminhada",
  "messaggio originale",
  "messaggio inoltrato",
  "oorspronkelijk bericht",
  "doorgestuurd bericht",
  "opprinnelig melding",
  "oprindelig meddelelse",
  "ursprungligt meddelande",
  "alkuperäinen viesti",
  "wiadomość oryginalna",
  "oryginalna wiadomość",
  "původní zpráva",
  "исходное сообщение",
  "пересылаемое сообщение",
  "orijinal mesaj",
  "eredeti üzenet",
  "元のメッセージ",
  "转发邮件",
  "原始邮件",
  "원본 메시지",
];

const bare = (line: string) =>
  line
    .replace(/^[\s>|]+/, "")
    .replace(/\s+/g, " ")
    .trim();
const isQuoted = (line: string) => /^\s{0,3}>/.test(line);
const isBlank = (line: string) => line.trim() === "";

/** An introduction of a quote stands in one to three lines and ends with a colon. */
function attributionEnd(lines: readonly string[], at: number): number | null {
  let joined = "";
  for (let i = at; i < Math.min(at + 3, lines.length); i++) {
    const line = lines[i]!.trim();
    if (line === "" || line.length > 300 || isQuoted(line)) return null;
    joined = `${joined} ${line}`.trim();
    if (!/[:：]$/.test(line)) continue;
    const low = joined.slice(0, -1).trim().toLowerCase();
    const named = /[@<\d]/.test(joined);
    return named && WROTE.some((w) => holdsWord(low, w)) ? i + 1 : null;
  }
  return null;
}

function holdsWord(text: string, word: string): boolean {
  const at = text.lastIndexOf(word);
  // Near the end, or near the start where a language puts the verb first.
  return at >= 0 && (at + word.length >= text.length - 90 || at < 12);
}

/** Lines such as "From: …" in a row, as programs put above what they repeat. */
function headerBlock(lines: readonly string[], at: number): boolean {
  let found = 0;
  for (let i = at; i < Math.min(at + 7, lines.length); i++) {
    const word = /^\*?([^:：]{1,20})\*?\s*[:：]/
      .exec(bare(lines[i]!))?.[1]
      ?.replace(/\*/g, "")
      .trim()
      .toLowerCase();
    if (word !== undefined && HEADER_WORDS.has(word)) found++;
    else if (found === 0 || isBlank(lines[i]!)) break;
  }
  return found >= 3;
}

/** "----- Original message -----" and its like: the words alone prove nothing, the dashes or the colon do. */
function isDivider(line: string): boolean {
  const t = bare(line).toLowerCase();
  if (t.length > 80) return false;
  const inner = t.replace(/^[-_*\s]+/, "").replace(/[-_*:\s]+$/, "");
  return inner !== t && FORWARDED.includes(inner);
}

/** Lines long enough to know again. */
const SAME_FROM = 24;

/**
 * Ranges of `text`'s lines to fold, first line included, last excluded. `sent` is what we wrote on
 * this ticket before: it is known again by its lines, whatever a program has put around it.
 */
export function foldQuotes(text: string, sent: readonly string[] = []): Fold[] {
  const whole = text.split("\n").map((l) => l.replace(/\r$/, ""));
  let chars = 0;
  let count = 0;
  while (count < whole.length && count < MAX_LINES && chars < MAX_CHARS) chars += whole[count++]!.length + 1;
  const lines = whole.slice(0, count);
  const ours = new Set<string>();
  for (const s of sent)
    for (const l of s.slice(0, MAX_CHARS).split("\n")) if (bare(l).length >= SAME_FROM) ours.add(bare(l));

  // 1. Which lines repeat something.
  const repeats = lines.map((l) => isQuoted(l) || (ours.size > 0 && ours.has(bare(l))));
  let rest: number | null = null;
  for (let i = 0; i < lines.length && rest === null; i++) {
    if (isBlank(lines[i]!) || repeats[i]) continue;
    const attributed = attributionEnd(lines, i);
    if (attributed !== null) {
      const next = firstText(lines, attributed);
      for (let j = i; j < attributed; j++) repeats[j] = true;
      // Quote marks follow and end by themselves; without them everything below is the quote.
      if (next !== null && !repeats[next]) rest = i;
      i = attributed - 1;
    } else if (isDivider(lines[i]!) || headerBlock(lines, i)) rest = i;
    else if (/^_{10,}$/.test(lines[i]!.trim()) && headerBlock(lines, firstText(lines, i + 1) ?? i)) rest = i;
  }
  if (rest !== null) for (let i = rest; i < lines.length; i++) repeats[i] = true;
  const end = rest !== null ? whole.length : count;

  // 2. Runs of them, blank lines between included.
  const runs: Fold[] = [];
  for (let i = 0; i < lines.length; i++) {
    if (!repeats[i]) continue;
    let to = i + 1;
    for (let j = to; j < lines.length && (repeats[j] || isBlank(lines[j]!)); j++) if (repeats[j]) to = j + 1;
    runs.push([i, to]);
    i = to - 1;
  }
  const last = runs.at(-1);
  if (last && rest !== null && last[1] === lines.length) last[1] = end;

  // 3. What stays visible. Answers between quotes are read with the lines they answer.
  const between = runs.length > 1 && runs.slice(1).some((r, n) => hasText(lines, runs[n]![1], r[0]));
  const folds = between ? runs.filter(([from, to]) => to - from > 8) : runs;
  const visible = whole.some((l, i) => !isBlank(l) && !folds.some(([from, to]) => i >= from && i < to));
  return visible ? folds : [];
}

function firstText(lines: readonly string[], from: number): number | null {
  for (let i = from; i < lines.length; i++) if (!isBlank(lines[i]!)) return i;
  return null;
}

function hasText(lines: readonly string[], from: number, to: number): boolean {
  const at = firstText(lines, from);
  return at !== null && at < to;
}
