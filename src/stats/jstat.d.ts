/** Only what this program uses of jstat, which ships no types. */
declare module 'jstat' {
  interface Jstat {
    readonly chisquare: { inv(lowerTail: number, df: number): number };
    readonly centralF: { inv(lowerTail: number, df1: number, df2: number): number };
    readonly studentt: { inv(lowerTail: number, df: number): number };
    readonly normal: { inv(lowerTail: number, mean: number, sd: number): number };
  }
  const jstat: Jstat;
  export default jstat;
}
