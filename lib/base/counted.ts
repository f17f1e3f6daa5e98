/**
 * A number of things in words.
 *
 * @example counted(1, 'row', 'rows') // '1 row'
 */
export function counted(count: number, one: string, many: string): string {
  return `${count} ${count === 1 ? one : many}`;
}
