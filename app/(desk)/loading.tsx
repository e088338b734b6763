/** Shown only while a page is fetched; a sentence, because a moving outline says no more. */
export default function Loading() {
  return (
    <main id="main" className="desk">
      <p className="q py-6" role="status">
        Fetching the page.
      </p>
    </main>
  );
}
