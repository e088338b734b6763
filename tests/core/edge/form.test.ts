import { expect, test } from "vitest";
import { formInput, formValues, stateOf } from "@/app/_edge/form";
import { ok, refuse } from "@/lib/base/result";

function form(...fields: [string, string | File][]): FormData {
  const data = new FormData();
  for (const [name, value] of fields) data.append(name, value);
  return data;
}

test("names become an object: dots go down, repeats and [] are lists, empty fields are left out", () => {
  const input = formInput(
    form(
      ["serial", "OW44-0001"],
      ["answers.since", "2026-03-04"],
      ["answers.seen", "yes"],
      ["part", "A1"],
      ["part", "A2"],
      ["photo[]", "one"],
      ["empty", ""],
      ["$ACTION_ID_1", "x"],
    ),
  );
  expect(JSON.parse(JSON.stringify(input))).toEqual({
    serial: "OW44-0001",
    answers: { since: "2026-03-04", seen: "yes" },
    part: ["A1", "A2"],
    photo: ["one"],
  });
});

test("a name that reaches for the prototype is ignored", () => {
  formInput(form(["__proto__.admin", "1"], ["constructor.prototype.admin", "1"]));
  expect(({} as { admin?: string }).admin).toBeUndefined();
});

test("a scalar and a branch under one name do not throw", () => {
  expect(formInput(form(["a", "1"], ["a.b", "2"]))).toMatchObject({ a: { b: "2" } });
});

test("an unchosen file field is left out, a chosen one stays a file", () => {
  const input = formInput(form(["none", new File([], "")], ["log", new File(["x"], "sel.log")]));
  expect(input.none).toBeUndefined();
  expect(input.log).toBeInstanceOf(File);
});

test("a refusal comes back with the words and everything typed, files aside", () => {
  const sent = form(["serial", "OW 44"], ["empty", ""], ["log", new File(["x"], "sel.log")]);
  const state = stateOf(refuse("invalid", "Look again.", { fields: { serial: ["No such unit."] } }), sent);
  expect(state).toEqual({
    ok: false,
    message: "Look again.",
    fields: { serial: ["No such unit."] },
    details: undefined,
    values: { serial: "OW 44", empty: "" },
  });
  expect(stateOf(ok(3), sent)).toEqual({ ok: true, value: 3 });
  expect(formValues(form(["p", "a"], ["p", "b"]))).toEqual({ p: ["a", "b"] });
});
