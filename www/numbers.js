/*
 * How are the numbers of the sky shown, explained and copied?
 *
 * One row per quantity, built once and then only rewritten. The name is a button that opens its meaning.
 */
Tailvane.numbers = (function () {
  const body = Tailvane.find("list", "numbers");
  const copied = Tailvane.find("show", "copied");
  const rows = new Map();
  let shownKeys = "";

  function frame(reading) {
    const keys = reading.rows.map((row) => row.key).join();
    if (keys !== shownKeys) {
      shownKeys = keys;
      rows.clear();
      body.replaceChildren(...reading.rows.flatMap(build));
    }
    for (const row of reading.rows) {
      const cell = rows.get(row.key);
      Tailvane.write(cell, row.printed);
      cell.dataset.value = row.value;
    }
    Tailvane.write(Tailvane.find("show", "place"), reading.place);
    Tailvane.write(Tailvane.find("show", "numbers-caption"), "The sky in numbers, " + reading.time_words);
  }

  function build(row) {
    const line = document.createElement("tr");
    const head = document.createElement("th");
    head.scope = "row";
    const name = document.createElement("button");
    name.type = "button";
    name.className = "quantity";
    name.textContent = row.words;
    name.setAttribute("aria-expanded", "false");
    head.append(name);
    const cell = document.createElement("td");
    cell.dataset.quantity = row.key;
    line.append(head, cell);
    rows.set(row.key, cell);

    const more = document.createElement("tr");
    more.className = "more";
    more.hidden = true;
    const wide = document.createElement("td");
    wide.colSpan = 2;
    const meaning = document.createElement("p");
    meaning.textContent = row.meaning;
    const copy = document.createElement("button");
    copy.type = "button";
    copy.textContent = "Copy the value";
    copy.setAttribute("aria-label", "Copy the value: " + row.words);
    const key = document.createElement("code");
    key.textContent = row.key;
    const foot = document.createElement("p");
    foot.append("In full precision as ", key, ". ", copy);
    wide.append(meaning, foot);
    more.append(wide);
    name.addEventListener("click", () => {
      more.hidden = !more.hidden;
      name.setAttribute("aria-expanded", String(!more.hidden));
    });
    copy.addEventListener("click", () => Tailvane.copy(cell.dataset.value, tell));
    return [line, more];
  }

  let timer = 0;
  function tell(words) {
    copied.textContent = words;
    clearTimeout(timer);
    timer = setTimeout(() => {
      copied.textContent = "";
    }, 4000);
  }

  function start() {
    Tailvane.desk.onFrame(frame);
    Tailvane.onAct("copy-table", () => {
      const text = Tailvane.desk.ask((desk) => desk.table_text());
      if (text) {
        Tailvane.copy(text, tell);
      }
    });
  }

  return { start };
})();
