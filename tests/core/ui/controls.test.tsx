// @vitest-environment happy-dom
import { cleanup, render, screen } from "@testing-library/react";
import userEvent from "@testing-library/user-event";
import { afterEach, describe, expect, it, vi } from "vitest";
import { Button } from "@/components/ui/button";
import { Dialog } from "@/components/ui/dialog";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Choice, ChoiceGroup, Field, Select } from "@/components/ui/field";
import { Progress } from "@/components/ui/progress";

afterEach(cleanup);

describe("button", () => {
  it("says in its own label why it cannot act, and does not act", async () => {
    const send = vi.fn((e: React.FormEvent) => e.preventDefault());
    render(
      <form onSubmit={send}>
        <Button reason="Needs a scan first">Take it in</Button>
      </form>,
    );
    const button = screen.getByRole("button", { name: "Needs a scan first" });
    expect((button as HTMLButtonElement).disabled).toBe(true);
    await userEvent.click(button);
    expect(send).not.toHaveBeenCalled();
  });

  it("acts once the reason is gone", async () => {
    const send = vi.fn((e: React.FormEvent) => e.preventDefault());
    render(
      <form onSubmit={send}>
        <Button reason={null}>Take it in</Button>
      </form>,
    );
    await userEvent.click(screen.getByRole("button", { name: "Take it in" }));
    expect(send).toHaveBeenCalledOnce();
  });
});

describe("field", () => {
  it("ties label, hint and message to the input", () => {
    render(<Field label="Power-on hours" name="hours" hint="From the log." error="Give a whole number." />);
    const input = screen.getByLabelText("Power-on hours");
    expect(input.getAttribute("aria-invalid")).toBe("true");
    const said = (input.getAttribute("aria-describedby") ?? "")
      .split(" ")
      .map((id) => document.getElementById(id)?.textContent);
    expect(said).toEqual(["From the log.", "Give a whole number."]);
  });

  it("is not invalid without a message", () => {
    render(<Select label="Fault" name="fault" options={[{ value: "a", label: "A part is not seen" }]} />);
    expect(screen.getByLabelText("Fault").hasAttribute("aria-invalid")).toBe(false);
  });
});

describe("error summary", () => {
  const items = [
    { field: "hours", message: "Power-on hours: give a whole number" },
    { field: "remedy", message: "Remedy: choose one the clause allows" },
  ];
  const form = (shown: typeof items) => (
    <>
      <ErrorSummary title="Two things stop this RMA." items={shown} />
      <Field label="Power-on hours" name="hours" />
      <ChoiceGroup legend="Remedy" name="remedy">
        <Choice name="remedy" value="repair" title="Repair" />
      </ChoiceGroup>
    </>
  );

  it("takes focus when it appears and leads to each field", async () => {
    render(form(items));
    expect(document.activeElement).toBe(screen.getByRole("alert"));
    await userEvent.click(screen.getByRole("link", { name: /Power-on hours/ }));
    expect(document.activeElement).toBe(screen.getByLabelText("Power-on hours"));
    await userEvent.click(screen.getByRole("link", { name: /Remedy/ }));
    expect(document.activeElement).toBe(screen.getByRole("group", { name: "Remedy" }));
  });

  it("takes focus again when other things stop the form, not when the same do", () => {
    const { rerender } = render(form(items));
    const field = screen.getByLabelText("Power-on hours");
    field.focus();
    rerender(form([...items]));
    expect(document.activeElement).toBe(field);
    rerender(form(items.slice(1)));
    expect(document.activeElement).toBe(screen.getByRole("alert"));
  });

  it("draws nothing without items", () => {
    render(form([]));
    expect(screen.queryByRole("alert")).toBeNull();
  });

  it("links to a field of the same name where a screen draws its own", async () => {
    render(
      <>
        <ErrorSummary title="One thing." items={[{ field: "serial", message: "Serial: scan it" }]} />
        <input name="serial" aria-label="own" />
      </>,
    );
    await userEvent.click(screen.getByRole("link", { name: "Serial: scan it" }));
    expect(document.activeElement).toBe(screen.getByLabelText("own"));
  });
});

describe("dialog", () => {
  it("gives focus to the safe choice, and Escape is the safe choice", async () => {
    const close = vi.fn();
    render(
      <Dialog
        open
        title="Decline this claim?"
        onClose={close}
        actions={
          <>
            <button type="button" data-safe>
              Keep it open
            </button>
            <button type="button">Decline, send C2</button>
          </>
        }
      />,
    );
    const dialog = screen.getByRole("dialog", { name: "Decline this claim?" });
    expect((dialog as HTMLDialogElement).open).toBe(true);
    expect(document.activeElement).toBe(screen.getByRole("button", { name: "Keep it open" }));
    (dialog as HTMLDialogElement).close();
    expect(close).toHaveBeenCalledOnce();
  });
});

it("progress keeps its share between nothing and all", () => {
  const { rerender } = render(<Progress share={1.7} words="all sent" label="drive.log" />);
  const bar = screen.getByRole("progressbar", { name: "drive.log" });
  expect(bar.getAttribute("aria-valuenow")).toBe("100");
  rerender(<Progress share={-1} words="waiting" label="drive.log" />);
  expect(bar.getAttribute("aria-valuenow")).toBe("0");
});
