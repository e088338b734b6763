// @vitest-environment happy-dom
import { act, cleanup, fireEvent, render, screen } from "@testing-library/react";
import { afterEach, beforeEach, expect, it, vi } from "vitest";
import { ToastProvider, useToast } from "@/components/ui/toast";

beforeEach(() => vi.useFakeTimers());
afterEach(() => {
  cleanup();
  vi.useRealTimers();
});

const undo = vi.fn();
function Speaker() {
  const say = useToast();
  return (
    <button type="button" onClick={() => say("RMA-1207 authorized", { label: "Take back", run: undo })}>
      authorize
    </button>
  );
}

const speak = () => {
  render(
    <ToastProvider>
      <Speaker />
    </ToastProvider>,
  );
  fireEvent.click(screen.getByRole("button", { name: "authorize" }));
};

it("says what was done, for twenty seconds", () => {
  speak();
  const status = screen.getByRole("status");
  expect(status.textContent).toContain("RMA-1207 authorized");
  act(() => void vi.advanceTimersByTime(19_000));
  expect(status.textContent).toContain("RMA-1207 authorized");
  act(() => void vi.advanceTimersByTime(1_000));
  expect(status.textContent).toBe("");
});

it("takes back once, and is gone", () => {
  undo.mockClear();
  speak();
  fireEvent.click(screen.getByRole("button", { name: /Take back/ }));
  expect(undo).toHaveBeenCalledOnce();
  expect(screen.getByRole("status").textContent).toBe("");
});
