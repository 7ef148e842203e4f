/*
 * Which colours does the page wear?
 *
 * Every colour comes from the core as a custom property; the style sheet only names them.
 */
Tailvane.theme = (function () {
  let name = "dark";

  function wear(wanted) {
    const core = Tailvane.core.exports();
    const variables = core.theme_variables(wanted);
    name = wanted;
    const root = document.documentElement;
    for (const [property, value] of variables) {
      root.style.setProperty(property, value);
    }
    root.dataset.theme = name;
    Tailvane.find("control", "theme").value = name;
  }

  function start() {
    const control = Tailvane.find("control", "theme");
    const kept = Tailvane.store.read("theme");
    wear([...control.options].some((option) => option.value === kept) ? kept : "dark");
    control.addEventListener("change", () => {
      wear(control.value);
      Tailvane.store.write("theme", control.value);
      Tailvane.desk.redraw();
    });
    // Paper is the theme for print; a print is drawn larger than the screen.
    let before = name;
    window.addEventListener("beforeprint", () => {
      before = name;
      wear("paper");
      Tailvane.sky.drawForPrint();
    });
    window.addEventListener("afterprint", () => {
      wear(before);
      Tailvane.desk.redraw();
    });
  }

  return { start, wear, name: () => name };
})();
