/** The few functions that are used; the package brings no types. */
declare module "jstat" {
  const jstat: {
    chisquare: { inv(p: number, df: number): number; cdf(x: number, df: number): number };
  };
  export default jstat;
}
