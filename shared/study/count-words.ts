/** A number with its noun: `1 open end`, `3 open ends`. */
export function counted(count: number, one: string, many = `${one}s`): string {
  return `${count} ${count === 1 ? one : many}`;
}
