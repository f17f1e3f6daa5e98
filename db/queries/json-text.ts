/** Values as JSON that the database can hold: files bring zero characters and broken surrogate pairs, which jsonb refuses. */

/** JSON text of a value; what the database cannot hold becomes the replacement character. */
export function jsonText(value: unknown): string {
  return JSON.stringify(value, (_key, member) => (typeof member === 'string' ? storableText(member) : member));
}

/** The value as it will come back from a jsonb column. */
export function storable<T>(value: T): T {
  return JSON.parse(jsonText(value)) as T;
}

/** @example storableText('a\0b') // 'a�b' */
export function storableText(text: string): string {
  return text.replaceAll('\0', '\ufffd').replace(/[\ud800-\udbff](?![\udc00-\udfff])|(?<![\ud800-\udbff])[\udc00-\udfff]/g, '\ufffd');
}
