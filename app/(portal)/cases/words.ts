/** Whose move it is, said to the customer. */
export function moveWords(c: { waitingOn: string; waitingFor: string; closedAt: Date | null }): string {
  if (c.closedAt) return "It is closed.";
  switch (c.waitingOn) {
    case "customer":
      return `It is your move: ${c.waitingFor}.`;
    case "carrier":
      return "It is on its way.";
    case "dock":
      return "Our dock prepares what goes out.";
    case "bench":
      return "It is at our bench.";
    case "supplier":
      return "We wait for the maker.";
    default:
      return "It is our move.";
  }
}
