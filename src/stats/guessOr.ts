/** A library's first guess when it is a usable positive number, else our own rougher one. */
export function guessOr(guess: () => number, trusted: boolean, rough: number): number {
  const value = trusted ? guess() : rough;
  return value > 0 && value < Infinity ? value : rough;
}
