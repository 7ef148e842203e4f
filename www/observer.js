/*
 * Who looks: the centre of the Earth, a typed site, a site found by its code?
 */
Tailvane.observer = (function () {
  const form = Tailvane.find("form", "observer");
  const geocentre = Tailvane.find("control", "geocentre");
  const site = Tailvane.find("control", "site");
  const fields = Tailvane.find("box", "site");
  const search = Tailvane.find("input", "code-search");
  const hits = Tailvane.find("list", "codes");
  let shown = "";

  function frame(reading) {
    const key = JSON.stringify(reading.site || null);
    if (key === shown) {
      return;
    }
    shown = key;
    geocentre.checked = !reading.site;
    site.checked = Boolean(reading.site);
    fields.hidden = !reading.site;
    if (reading.site) {
      for (const field of fields.querySelectorAll("[data-site]")) {
        field.value = reading.site[field.dataset.site];
      }
    }
  }

  function useTyped(event) {
    event.preventDefault();
    if (geocentre.checked) {
      Tailvane.desk.change((desk) => desk.set_geocentre());
      return;
    }
    const typed = {};
    for (const field of fields.querySelectorAll("[data-site]")) {
      typed[field.dataset.site] = field.value;
    }
    Tailvane.desk.change((desk) => desk.set_site(typed));
  }

  async function findCodes() {
    const table = await Tailvane.core.sites();
    const found = search.value.trim() ? Tailvane.core.exports().find_sites(table, search.value) : [];
    hits.replaceChildren(
      ...found.map((hit) => {
        const item = document.createElement("li");
        const button = document.createElement("button");
        button.type = "button";
        button.className = "pick";
        button.textContent = hit.words;
        button.addEventListener("click", () => Tailvane.desk.change((desk) => desk.set_site_code(table, hit.code)));
        item.append(button);
        return item;
      })
    );
  }

  function start() {
    Tailvane.desk.onFrame(frame);
    form.addEventListener("submit", useTyped);
    geocentre.addEventListener("change", () => Tailvane.desk.change((desk) => desk.set_geocentre()));
    site.addEventListener("change", () => {
      fields.hidden = false;
      fields.querySelector("input").focus();
    });
    if (document.querySelector('script[data-block~="sites.data"]') || location.pathname.includes("/unpacked/")) {
      Tailvane.find("box", "codes").hidden = false;
      search.addEventListener("input", findCodes);
    }
  }

  return { start };
})();
