/*
 * Which comet is it: pasted, opened, typed, picked?
 *
 * Text goes to the core as it is. What was pasted stays in its box whatever happens; comets that were read stay in the
 * core and are picked by number.
 */
Tailvane.comet = (function () {
  const MOST_SHOWN = 100;
  /** A text box with megabytes in it stops the browser for seconds; beyond this only the beginning is shown. */
  const MOST_IN_BOX = 200000;
  const box = Tailvane.find("input", "elements");
  const found = Tailvane.find("show", "found");
  const file = Tailvane.find("file", "elements");
  const readBox = Tailvane.find("box", "read");
  const readList = Tailvane.find("list", "read");
  const readSearch = Tailvane.find("input", "read-search");
  const handList = Tailvane.find("list", "comets");
  const planList = Tailvane.find("list", "plan-comets");
  const storage = Tailvane.find("show", "storage");
  const fieldsForm = Tailvane.find("form", "elements");
  let lastRead = null;
  let examples = [];
  let shownFields = "";
  let readTimer = 0;
  let held = null;

  /** The whole text: what stands in the box, or the long text of which the box shows the beginning. */
  const wholeText = () => (held === null ? box.value : held);

  /** Puts text into the box and reads it. */
  function putText(text) {
    const long = text.length > MOST_IN_BOX;
    box.value = long ? text.slice(0, MOST_IN_BOX) : text;
    held = long ? text : null;
    read(text);
  }

  /** Marks the faulty line in the box, without taking the focus. */
  function markLine(line) {
    const lines = box.value.split("\n", line);
    if (!line || lines.length < line) {
      return;
    }
    const end = lines.join("\n").length;
    const start = end - lines[line - 1].length;
    box.setSelectionRange(start, end);
    box.scrollTop = (line - 2) * (box.scrollHeight / box.value.split("\n").length);
  }

  /** Reads pasted text; the first comet of it comes onto the desk. */
  function read(text) {
    clearTimeout(readTimer);
    lastRead = text;
    const result = Tailvane.desk.change((desk) => desk.read_text(text, Date.now()));
    if (!result) {
      box.setAttribute("aria-invalid", "true");
      Tailvane.write(found, "Nothing was changed; the text is kept." + shownPart());
      markLine(Tailvane.desk.refusal().line);
      readBox.hidden = true;
      return;
    }
    const faults = result.errors.length + result.left_out;
    box.setAttribute("aria-invalid", String(faults > 0));
    if (faults > 0) {
      const more = faults > 1 ? "\n" + (faults - 1) + " more could not be read." : "";
      Tailvane.say.error(result.errors[0].message + "." + more);
      markLine(result.errors[0].line);
    }
    const count = result.count;
    const read = count === 1 ? result.first + " was read" : count + " comets were read, shown is " + result.first;
    const notices = result.notices.length ? " " + result.notices[0] + (result.notices.length > 1 ? " And " + (result.notices.length - 1) + " more notices." : "") : "";
    Tailvane.write(found, read + (faults ? "; " + faults + " could not be read." : ".") + notices + shownPart());
    Tailvane.season.pause();
    readBox.hidden = count < 2;
    if (count > 1) {
      readSearch.value = "";
      listRead();
    }
  }

  const shownPart = () => (held === null ? "" : " The box shows the beginning of " + Math.round(held.length / 1000) + " kB.");

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

  /** The comets that the plan itself carries beside the one shown. */
  function listInPlan(desk) {
    const names = desk.comets();
    const key = JSON.stringify(names);
    if (planList.dataset.key === key) {
      return;
    }
    planList.dataset.key = key;
    Tailvane.find("box", "plan-comets").hidden = names.length === 0;
    planList.replaceChildren(
      ...names.map((name, number) =>
        pick(name, "in this plan", () => Tailvane.desk.change((d) => d.show_kept(number, Date.now())), () => Tailvane.desk.change((d) => d.drop_kept(number)))
      )
    );
  }

  /** Text that was in the box before: put back, not read again. */
  function putBack(text) {
    box.value = text;
    lastRead = text;
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

  function frame(reading, desk) {
    listInPlan(desk);
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
      putText(await chosen.text());
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
    box.addEventListener("paste", (event) => {
      const text = event.clipboardData ? event.clipboardData.getData("text") : "";
      if (text.length > MOST_IN_BOX) {
        event.preventDefault();
        putText(text);
        return;
      }
      held = null;
      setTimeout(() => read(box.value));
    });
    box.addEventListener("input", () => {
      held = null;
      clearTimeout(readTimer);
      readTimer = setTimeout(() => box.value !== lastRead && box.value.trim() !== "" && read(box.value), 1200);
    });
    box.addEventListener("change", () => held === null && box.value !== lastRead && box.value.trim() !== "" && read(box.value));
    Tailvane.onAct("read", () => read(wholeText()));
    Tailvane.onAct("open-elements", () => file.click());
    file.addEventListener("change", openFile);
    Tailvane.onAct("keep", keep);
    Tailvane.onAct("keep-in-plan", () => {
      const kept = Tailvane.desk.change((desk) => desk.keep_comet());
      Tailvane.write(found, kept === undefined ? "" : kept ? "The plan carries this comet along." : "The plan carries this very comet already.");
    });
    readSearch.addEventListener("input", listRead);
    fieldsForm.addEventListener("submit", useTyped);
  }

  return { start, take, pick, putBack };
})();
