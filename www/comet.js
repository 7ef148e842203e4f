/*
 * Which comet is it: pasted, opened, typed, picked?
 *
 * Text goes to the core as it is. What was pasted stays in its box whatever happens; comets that were read stay in the
 * core and are picked by number.
 */
Tailvane.comet = (function () {
  const MOST_SHOWN = 100;
  const box = Tailvane.find("input", "elements");
  const found = Tailvane.find("show", "found");
  const file = Tailvane.find("file", "elements");
  const readBox = Tailvane.find("box", "read");
  const readList = Tailvane.find("list", "read");
  const readSearch = Tailvane.find("input", "read-search");
  const handList = Tailvane.find("list", "comets");
  const storage = Tailvane.find("show", "storage");
  const fieldsForm = Tailvane.find("form", "elements");
  let lastRead = null;
  let examples = [];
  let shownFields = "";
  let readTimer = 0;

  /** Reads pasted text; the first comet of it comes onto the desk. */
  function read(text) {
    clearTimeout(readTimer);
    lastRead = text;
    const result = Tailvane.desk.change((desk) => desk.read_text(text, Date.now()));
    if (!result) {
      box.setAttribute("aria-invalid", "true");
      Tailvane.write(found, "Nothing was changed; the text is kept.");
      readBox.hidden = true;
      return;
    }
    const faults = result.errors.length + result.left_out;
    box.setAttribute("aria-invalid", String(faults > 0));
    if (faults > 0) {
      const more = faults > 1 ? "\n" + (faults - 1) + " more could not be read." : "";
      Tailvane.say.error(result.errors[0].message + "." + more);
    }
    const count = result.count;
    const read = count === 1 ? result.first + " was read" : count + " comets were read, shown is " + result.first;
    const notices = result.notices.length ? " " + result.notices[0] + (result.notices.length > 1 ? " And " + (result.notices.length - 1) + " more notices." : "") : "";
    Tailvane.write(found, read + (faults ? "; " + faults + " could not be read." : ".") + notices);
    Tailvane.season.pause();
    readBox.hidden = count < 2;
    if (count > 1) {
      readSearch.value = "";
      listRead();
    }
  }

  function listRead() {
    const hits = Tailvane.desk.ask((desk) => desk.find_read(readSearch.value, MOST_SHOWN));
    if (!hits) {
      return;
    }
    const more = hits.total > hits.list.length ? ", the first " + hits.list.length + " shown" : "";
    Tailvane.write(Tailvane.find("show", "read-count"), "Find among those read (" + hits.total + more + ")");
    readList.replaceChildren(...hits.list.map((hit) => pick(hit.name, "", () => Tailvane.desk.change((desk) => desk.pick_read(hit.number, Date.now())))));
  }

  /** A list item with a button that takes a comet, and optionally one that forgets it. */
  function pick(name, about, take, forget) {
    const item = document.createElement("li");
    const button = document.createElement("button");
    button.type = "button";
    button.className = "pick";
    const title = document.createElement("span");
    title.textContent = name;
    button.append(title);
    if (about) {
      const small = document.createElement("small");
      small.textContent = about;
      button.append(small);
    }
    button.addEventListener("click", take);
    item.append(button);
    if (forget) {
      const away = document.createElement("button");
      away.type = "button";
      away.className = "forget";
      away.textContent = "Remove";
      away.setAttribute("aria-label", "Remove " + name);
      away.addEventListener("click", forget);
      item.append(away);
    }
    return item;
  }

  function listAtHand() {
    const core = Tailvane.core.exports();
    const kept = Tailvane.store.comets();
    const items = examples.map((example) => pick(example.name, example.about, () => take(example.plan)));
    kept.forEach((plan, number) => {
      let name;
      try {
        name = core.plan_name(plan);
      } catch (refused) {
        // Whatever else lies in the store is not ours to show.
        return;
      }
      items.push(pick(name, "kept in this browser", () => takeComet(plan), () => {
        const list = Tailvane.store.comets();
        list.splice(number, 1);
        Tailvane.store.keepComets(list);
        listAtHand();
      }));
    });
    handList.replaceChildren(...items);
  }

  function take(plan) {
    Tailvane.season.pause();
    return Tailvane.desk.change((desk) => desk.set_plan(plan));
  }

  /** Takes only the comet of a plan; observer and time stay. */
  function takeComet(plan) {
    Tailvane.season.pause();
    Tailvane.desk.change((desk) => desk.set_comet(plan, Date.now()));
  }

  function keep() {
    const plan = Tailvane.desk.ask((desk) => desk.plan_json());
    if (!plan) {
      return;
    }
    const list = Tailvane.store.comets();
    list.push(plan);
    const kept = Tailvane.store.keepComets(list);
    Tailvane.write(found, kept ? "Kept in this browser." : "This browser does not let the page keep anything. Save the plan as a file instead.");
    listAtHand();
  }

  function frame(reading) {
    const key = JSON.stringify(reading.elements);
    if (key === shownFields) {
      return;
    }
    shownFields = key;
    for (const field of fieldsForm.querySelectorAll("[data-element]")) {
      field.value = reading.elements[field.dataset.element];
    }
  }

  function useTyped(event) {
    event.preventDefault();
    const typed = {};
    for (const field of fieldsForm.querySelectorAll("[data-element]")) {
      typed[field.dataset.element] = field.value;
    }
    Tailvane.desk.change((desk) => desk.set_elements(typed));
  }

  async function openFile() {
    const chosen = file.files[0];
    file.value = "";
    if (chosen) {
      box.value = await chosen.text();
      read(box.value);
    }
  }

  function start() {
    examples = Tailvane.core.exports().examples();
    Tailvane.desk.onFrame(frame);
    listAtHand();
    if (!Tailvane.store.works()) {
      storage.hidden = false;
      storage.textContent = "This browser does not let the page keep comets between visits. Save plans as files instead.";
    }
    // A paste is read at once, typing when it rests or the box is left.
    box.addEventListener("paste", () => setTimeout(() => read(box.value)));
    box.addEventListener("input", () => {
      clearTimeout(readTimer);
      readTimer = setTimeout(() => box.value !== lastRead && box.value.trim() !== "" && read(box.value), 1200);
    });
    box.addEventListener("change", () => box.value !== lastRead && box.value.trim() !== "" && read(box.value));
    Tailvane.onAct("read", () => read(box.value));
    Tailvane.onAct("open-elements", () => file.click());
    file.addEventListener("change", openFile);
    Tailvane.onAct("keep", keep);
    readSearch.addEventListener("input", listRead);
    fieldsForm.addEventListener("submit", useTyped);
  }

  return { start, take };
})();
