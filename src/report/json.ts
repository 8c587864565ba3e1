/** JSON that can stand inside a script element: nothing in it can end the element or a line of script. */
export function sanitizeJson(data: unknown): string {
  return JSON.stringify(data)
    .replace(/[<>&]/g, (c) => `\\u00${c.charCodeAt(0).toString(16)}`)
    .replace(/\u2028/g, '\\u2028')
    .replace(/\u2029/g, '\\u2029');
}
