/** True when both texts are equal; the time taken depends on the length of `given` alone, not on where they differ. */
export function equalInConstantTime(given: string, expected: string): boolean {
  let difference = given.length ^ expected.length;
  for (let i = 0; i < given.length; i += 1)
    difference |= given.charCodeAt(i) ^ expected.charCodeAt(i % Math.max(1, expected.length));
  return difference === 0;
}
