import type { Kept, Opened } from "./mailstore";

/** Pages of the mail host stand-in: a plain post room, not a mail program. */
const e = (text: string) =>
  text.replace(
    /[&<>"']/g,
    (c) => ({ "&": "&amp;", "<": "&lt;", ">": "&gt;", '"': "&quot;", "'": "&#39;" })[c]!,
  );
const q = encodeURIComponent;

export const CSS = `
:root{color-scheme:light dark;--paper:#FAF8F3;--sheet:#FFFEFA;--ink:#15201B;--ink2:#435049;--ink3:#58645D;--rule:#DAD4C6;--edge:#7B847D;--mask:#0E5B42;--on:#FBFDF9;--link:#255A8A;--bad:#9A2A17}
@media (prefers-color-scheme:dark){:root{--paper:#101411;--sheet:#181D19;--ink:#ECEEE6;--ink2:#BAC2B9;--ink3:#98A199;--rule:#2D342F;--edge:#717C74;--mask:#5CC29A;--on:#06140E;--link:#8FBCE6;--bad:#F28B72}}
*{box-sizing:border-box}body{margin:0;background:var(--paper);color:var(--ink);font:16px/1.5 "Atkinson Hyperlegible Next",Verdana,sans-serif}
main{max-width:860px;margin:0 auto;padding:20px}h1{font-size:25px;line-height:1.2;margin:0 0 6px}h2{font-size:18px;margin:28px 0 6px;border-top:1px solid var(--ink);padding-top:10px}
p{margin:0 0 10px}.q{color:var(--ink3);font-size:14px}a{color:var(--link)}code,.m{font-family:"Atkinson Hyperlegible Mono",ui-monospace,monospace;font-size:.94em;overflow-wrap:anywhere}
ul{list-style:none;margin:0;padding:0}li.row{border-bottom:1px solid var(--rule);padding:9px 0;display:flex;gap:12px;flex-wrap:wrap;justify-content:space-between}
pre{white-space:pre-wrap;overflow-wrap:anywhere;background:var(--sheet);border:1px solid var(--rule);padding:14px;font-size:15px;font-family:inherit;margin:0 0 12px}
iframe{width:100%;height:560px;border:1px solid var(--edge);background:#fff}
label{display:block;font-weight:600;margin:12px 0 4px}input:not([type=checkbox]),textarea{width:100%;padding:9px 10px;border:1px solid var(--edge);border-bottom:2px solid var(--ink2);border-radius:2px;background:var(--sheet);color:var(--ink);font:inherit}
button{margin-top:14px;min-height:44px;padding:0 22px;border:0;border-radius:0 2px 2px 2px;color:var(--on);background:linear-gradient(135deg,transparent 5.5px,var(--mask) 6px);font-size:16px;font-weight:600;font-family:inherit;cursor:pointer}
.check{font-weight:400;display:flex;gap:8px;align-items:center}.said{border:2px solid var(--bad);padding:10px 14px;margin:0 0 14px}.done{border:2px solid var(--mask);padding:10px 14px;margin:0 0 14px}
:focus-visible{outline:3px solid var(--link);outline-offset:2px}`;

export function page(title: string, body: string): string {
  return `<!doctype html><html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width,initial-scale=1"><title>${e(title)}</title><link rel="stylesheet" href="/style.css"></head><body><main>${body}</main></body></html>`;
}

const when = (iso: string) =>
  new Intl.DateTimeFormat("en-US", { dateStyle: "medium", timeStyle: "medium", hour12: false }).format(
    new Date(iso),
  );
const size = (n: number) => (n < 10_240 ? `${n} bytes` : `${Math.round(n / 1024)} kB`);

export function boxesPage(boxes: { box: string; mails: number; newest: Kept }[], desk: string): string {
  const rows = boxes
    .map(
      (b) =>
        `<li class="row"><a class="m" href="/box?a=${q(b.box)}">${e(b.box)}</a><span>${b.mails === 1 ? "one mail" : `${b.mails} mails`}; newest: ${e(b.newest.subject || "no subject")}</span></li>`,
    )
    .join("");
  return page(
    "Mail host stand-in",
    `<h1>Post room</h1><p class="q">Everything that Mendbay sends here lies in these mailboxes; nothing leaves this machine.</p>
<ul>${rows || "<li>Nothing was sent yet. Write to the desk below, or let it write first.</li>"}</ul>
<h2>Write to the desk as anybody</h2>${form({ from: "", to: desk, subject: "", refs: "", quote: false })}`,
  );
}

export function boxPage(box: string, mails: readonly Kept[], desk: string): string {
  const rows = mails
    .map(
      (k) =>
        `<li class="row"><a href="/mail/${k.id}">${e(k.subject || "no subject")}</a><span class="q">${k.sent ? `to ${e(k.to.join(", "))}` : `from ${e(k.from)}`}${k.files ? `, ${k.files === 1 ? "one file" : `${k.files} files`}` : ""}, ${when(k.at)}</span></li>`,
    )
    .join("");
  return page(
    box,
    `<p><a href="/">All mailboxes</a></p><h1 class="m">${e(box)}</h1><ul>${rows || "<li>Nothing here yet.</li>"}</ul>
<h2>Write to the desk as ${e(box)}</h2>${form({ from: box, to: desk, subject: "", refs: "", quote: false })}`,
  );
}

export function mailPage(m: Opened): string {
  const shown = [
    "From",
    "To",
    "Reply-To",
    "Date",
    "Message-ID",
    "In-Reply-To",
    "References",
    "Auto-Submitted",
  ];
  const heads = m.headers
    .filter((h) => shown.some((s) => s.toLowerCase() === h.name.toLowerCase()))
    .map((h) => `<li><b>${e(h.name)}</b> <span class="m">${e(h.value)}</span></li>`)
    .join("");
  const files = m.files
    .map(
      (f) =>
        `<li class="row"><a href="/mail/${m.kept.id}/file/${f.n}">${e(f.name)}</a><span class="q">${e(f.type)}, ${size(f.size)}</span></li>`,
    )
    .join("");
  const links = e(m.text).replace(
    /https?:\/\/[^\s<>"]+[^\s<>".,;:)\]]/g,
    (url) => `<a href="${url}">${url}</a>`,
  );
  const subject = /^re:/i.test(m.kept.subject) ? m.kept.subject : `Re: ${m.kept.subject}`;
  return page(
    m.kept.subject || "no subject",
    `<p><a href="/box?a=${q(m.kept.box)}">${e(m.kept.box)}</a></p><h1>${e(m.kept.subject || "no subject")}</h1><ul class="q">${heads}</ul>
<h2>Text</h2><pre>${links}</pre>
${m.html ? `<h2>As laid out</h2><iframe title="The mail as laid out" sandbox="allow-popups allow-popups-to-escape-sandbox" src="/mail/${m.kept.id}/html"></iframe>` : ""}
${files ? `<h2>Files</h2><ul>${files}</ul>` : ""}
<p class="q"><a href="/mail/${m.kept.id}/raw">The raw mail</a>, ${size(m.kept.size)}</p>
${m.kept.sent ? "" : `<h2>Answer as ${e(m.kept.box)}</h2>${form({ from: m.kept.box, to: m.replyTo, subject, refs: m.kept.id, quote: true })}`}`,
  );
}

function form(f: { from: string; to: string; subject: string; refs: string; quote: boolean }): string {
  const field = (name: string, label: string, value: string, more = "") =>
    `<label for="${name}">${label}</label><input id="${name}" name="${name}" value="${e(value)}" ${more}>`;
  return `<form method="post" action="/send" enctype="multipart/form-data">
<input type="hidden" name="answers" value="${e(f.refs)}">
${field("from", "From", f.from, 'required type="email" class="m"')}
${f.from ? "" : field("name", "Name", "")}
${field("to", "To", f.to, 'required class="m"')}
${field("subject", "Subject", f.subject)}
<label for="text">Text</label><textarea id="text" name="text" rows="9" required></textarea>
${f.quote ? '<label class="check"><input type="checkbox" name="quote" checked> Repeat their mail below</label>' : ""}
<label for="files">Files</label><input id="files" type="file" name="files" multiple>
<button>Send it over SMTP</button></form>`;
}

export function sentPage(box: string, outcome: { ok: boolean; words: string }): string {
  return page(
    outcome.ok ? "Sent" : "Not sent",
    `<p class="${outcome.ok ? "done" : "said"}" role="status">${outcome.ok ? "The receiver has taken it" : "The receiver has not taken it"}: <span class="m">${e(outcome.words)}</span></p>
<p><a href="/box?a=${q(box)}">Back to ${e(box)}</a></p>`,
  );
}
