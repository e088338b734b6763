/** The one definition behind all figures. It is printed with them. */
export function Method({ zone }: { zone: string }) {
  return (
    <details id="method">
      <summary>How these are computed</summary>
      <ul className="s plain-list">
        <li>
          Age is counted in days from the day a unit was shipped, or a part was fitted in another&apos;s
          place. A year has 365.25 days, a month of service a twelfth of that. Days are those of {zone}.
        </li>
        <li>
          Only failures confirmed at the bench count, on the day their ticket was first received. No fault
          found and damage not covered are no failures; both stay in the time counted.
        </li>
        <li>
          Time stops at the first confirmed failure, the end of cover, removal, the end of the sale, or today.
          What happens later, as after a repair, counts neither as failure nor as time.
        </li>
        <li>
          Returns that the bench has not judged yet are no failures so far. The table gives the upper limit if
          all of them were.
        </li>
        <li>
          A fault on the very day of shipping is dead on arrival: a share of arrivals, never a rate. The share
          counts every confirmed fault reported inside the DOA window, of units whose window has passed.
        </li>
        <li>
          A unit in its second life with us is refurbished. Its age begins anew with each life, as that of
          refurbished units whose earlier use nobody knows.
        </li>
        <li>
          Rates have exact Poisson limits, shares exact binomial ones, curves log-log limits on Kaplan-Meier.
          All are 95%, two-sided. Poisson limits are too narrow where failures come in clusters, as from one
          bad delivery.
        </li>
        <li>
          A ship month stands out when it has more failures than all months together lead to expect at its
          ages, with at most 5% of such marks false (Benjamini-Hochberg over the months shown). It says look,
          not recall.
        </li>
        <li>
          Nothing is taken off for faults that happened but are not reported yet; the newest weeks look a
          little better than they are.
        </li>
      </ul>
    </details>
  );
}
