/*
 * What does the browser keep between visits?
 *
 * Comets a person keeps, and the theme. Local files may share one store with other pages, and a browser may refuse it
 * altogether: every access is guarded, keys are prefixed, and whatever is read is checked by the core before use.
 */
Tailvane.store = (function () {
  const PREFIX = "tailvane.";

  function read(key) {
    try {
      return localStorage.getItem(PREFIX + key);
    } catch (refused) {
      return null;
    }
  }

  /** Returns whether the browser kept it. */
  function write(key, text) {
    try {
      localStorage.setItem(PREFIX + key, text);
      return true;
    } catch (refused) {
      return false;
    }
  }

  /** Whether anything can be kept here. */
  function works() {
    if (!write("probe", "1")) {
      return false;
    }
    try {
      localStorage.removeItem(PREFIX + "probe");
    } catch (refused) {
      return false;
    }
    return true;
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

  return { read, write, works, comets, keepComets: (list) => write("comets", JSON.stringify(list)) };
})();
