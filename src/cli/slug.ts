/** Longest name of a report. */
const LONGEST = 60;

/**
 * A name for files: lower case, letters, digits and `-`, at most 60. Accents on Latin letters are dropped; other
 * scripts stay as they are.
 */
export function slugOf(text: string): string {
  const plain = text
    .normalize('NFKD')
    .replace(/(\p{Script=Latin})\p{M}+/gu, '$1')
    .normalize('NFC')
    .toLowerCase()
    .replaceAll('ß', 'ss')
    .replaceAll('æ', 'ae')
    .replaceAll('œ', 'oe')
    .replaceAll('ø', 'o')
    .replaceAll('ł', 'l')
    .replaceAll('đ', 'd');
  const joined = plain.replace(/[^\p{L}\p{M}\p{N}]+/gu, '-').replace(/^-+|-+$/g, '');
  return [...joined].slice(0, LONGEST).join('').replace(/-+$/, '') || 'race';
}

/** Date and name of a race, as its files are called. A name that begins with the date keeps it once. */
export function raceSlug(day: string | null, name: string): string {
  const slug = slugOf(name);
  if (day === null || slug.startsWith(day)) return slug;
  return slugOf(`${day} ${name}`);
}
