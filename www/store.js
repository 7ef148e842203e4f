/*
 * What does the browser keep between visits, and how is it reached?
 *
 * Local files may share one store with other pages, and a browser may refuse it altogether: every access is guarded,
 * keys are prefixed, and whatever is read is checked by the core before use.
 */
Tailvane.store = (function () {
  const PREFIX = "tailvane.";

  /** What `act` gives, or `otherwise` where the browser refuses its store. */
  function guarded(act, otherwise) {
    try {
      return act();
    } catch (refused) {
      return otherwise;
    }
  }

  const read = (key) => guarded(() => localStorage.getItem(PREFIX + key), null);

  /** Returns whether the browser kept it. */
  const write = (key, text) =>
    guarded(() => {
      localStorage.setItem(PREFIX + key, text);
      return true;
    }, false);

  const remove = (key) => guarded(() => localStorage.removeItem(PREFIX + key), undefined);

  /** Keys that begin so, without the prefix of the page. */
  const keys = (start) => guarded(() => Object.keys(localStorage).filter((key) => key.startsWith(PREFIX + start)).map((key) => key.slice(PREFIX.length)), []);

  /** What this tab keeps under a key; with a text, keeps that. */
  const tab = (key, text) =>
    guarded(() => {
      if (text !== undefined) {
        sessionStorage.setItem(PREFIX + key, text);
      }
      return sessionStorage.getItem(PREFIX + key);
    }, null);

  /** Whether anything can be kept here. */
  function works() {
    const kept = write("probe", "1");
    remove("probe");
    return kept;
  }

  /** The kept comets, as plan texts; whatever is no list of texts counts as none. */
  function comets() {
    try {
      const list = JSON.parse(read("comets") || "[]");
      return Array.isArray(list) ? list.filter((plan) => typeof plan === "string") : [];
    } catch (broken) {
      return [];
    }
  }

  return { PREFIX, read, write, remove, keys, tab, works, comets, keepComets: (list) => write("comets", JSON.stringify(list)) };
})();
