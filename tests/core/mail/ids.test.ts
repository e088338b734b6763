import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { baseSubject, idsIn, referenceHeaders, replyReferences } from "@/lib/mail/ids";

describe("base subject: the algorithm of RFC 5256 s. 2.1, worked by hand", () => {
  test.each([
    ["RE:Fwd:  Node down", "Node down"],
    ["Re[2]: Node down", "Node down"],
    ["Re: [rma] Node down", "Node down"],
    ["[rma] Re: Node down", "Node down"],
    ["[rma]", "[rma]"],
    ["Re: [rma]", "[rma]"],
    ["[Fwd: Node down]", "Node down"],
    ["[Fwd: Re: [x] Node down (fwd)]", "Node down"],
    ["[Fwd: Node down] urgent", "urgent"],
    ["fwd:re:FW: x (fwd) (FWD) ", "x"],
    ["AW: Node down", "AW: Node down"],
    ["Re : Node down", "Node down"],
    ["Re: Re:", ""],
    ["(fwd)", ""],
    ["Reply: x", "Reply: x"],
    ["FW [a] [b]: x", "FW [a] [b]: x"],
    ["[a][b]Re: x", "x"],
    ["[a] [b]", "[b]"],
    ["re[a[b]]: x", "re[a[b]]: x"],
  ])("%s", (given, base) => expect(baseSubject(given)).toBe(base));

  test("taken twice it is the same", () => {
    fc.assert(fc.property(fc.string(), (s) => baseSubject(baseSubject(s)) === baseSubject(s)));
  });
});

describe("reference headers, RFC 5322 s. 3.6.4", () => {
  const line = (key: string, value: string) => ({ key, line: `${key}: ${value}` });

  test("two ids in one header, commas and junk", () => {
    const read = referenceHeaders([
      line("in-reply-to", "<1@x.example> <2@x.example>"),
      line("references", "<1@x.example>,<2@x.example> <junk> <bad@> text <3@x.example>"),
      line("message-id", " <own@x.example> "),
    ]);
    expect(read.inReplyTo).toEqual(["<1@x.example>", "<2@x.example>"]);
    expect(read.references).toEqual(["<1@x.example>", "<2@x.example>", "<3@x.example>"]);
    expect(read.messageId).toBe("<own@x.example>");
    expect(read.doubled).toEqual([]);
  });

  test("words before an id are not part of it", () => {
    expect(idsIn('Your message of "Mon" <1@x.example>')).toEqual(["<1@x.example>"]);
  });

  test("what may stand once and stands twice is named", () => {
    expect(referenceHeaders([line("from", "a@x.example"), line("from", "b@x.example")]).doubled).toEqual([
      "from",
    ]);
  });

  test.each([
    [
      "references and id",
      { messageId: "<c@x>", references: ["<a@x>", "<b@x>"], inReplyTo: ["<b@x>"] },
      ["<a@x>", "<b@x>", "<c@x>"],
    ],
    [
      "one id in In-Reply-To",
      { messageId: "<c@x>", references: [], inReplyTo: ["<b@x>"] },
      ["<b@x>", "<c@x>"],
    ],
    [
      "two ids in In-Reply-To",
      { messageId: "<c@x>", references: [], inReplyTo: ["<a@x>", "<b@x>"] },
      ["<c@x>"],
    ],
    ["no id at all", { messageId: null, references: ["<a@x>"], inReplyTo: [] }, []],
  ])("a reply to a parent with %s", (_, parent, wanted) => expect(replyReferences(parent)).toEqual(wanted));

  test("a long chain keeps its root and its newest", () => {
    const many = Array.from({ length: 80 }, (_, i) => `<${i}@a-rather-long-host.example>`);
    const chain = replyReferences({ messageId: "<new@x.example>", references: many, inReplyTo: [] });
    expect(chain[0]).toBe(many[0]);
    expect(chain.at(-1)).toBe("<new@x.example>");
    expect(chain.join(" ").length).toBeLessThanOrEqual(900);
  });
});
