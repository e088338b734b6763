/** An entry of the record, cited by its reference. It leads to the entry on the same page unless told where. */
export function Cite({ refName, href }: { refName: string; href?: string }) {
  return (
    <a className="cite" href={href ?? `#${refName}`} aria-label={`Entry ${refName}`}>
      {refName}
    </a>
  );
}
