/**
 * Some systems hand the browser a language that is no language tag (a POSIX locale such as `en-US@posix`); what asks
 * Intl for it then throws, the charting library at load. Imported before anything else: such a tag becomes its own
 * beginning, or English.
 */
function known(tag: string): boolean {
  try {
    Intl.getCanonicalLocales(tag);
    return true;
  } catch {
    return false;
  }
}

const { language } = navigator;
if (!known(language)) {
  const start = language.split(/[@._]/)[0];
  const value = known(start) ? start : 'en';
  Object.defineProperty(navigator, 'language', { value, configurable: true });
}
