export default function Loading() {
  return <p className="hint portal-wait">One moment.</p>;
}
