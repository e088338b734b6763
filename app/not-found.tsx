import Link from "next/link";

/** The same for what does not exist and for what this person may not see. */
export default function NotFound() {
  return (
    <div className="portal">
      <main id="main" className="letter">
        <h1>Nothing is here.</h1>
        <p>
          There is no page at this address, or it is not yours to see. Check the number, or start from{" "}
          <Link href="/">your first page</Link>.
        </p>
      </main>
    </div>
  );
}
