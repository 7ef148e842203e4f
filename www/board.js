/*
 * Which of many comets are worth the night?
 *
 * The core holds the board, sorts it and words it; the page shows its first rows. It is made when its bench is open and the
 * page rests on another night, site or list. How dust lies sunward takes longest and fills in piece by piece.
 */
Tailvane.board = (function () {
  const FIRST_ROWS = 50;
  /** So long the sunward dust is looked at in one piece, milliseconds. */
  const PIECE_MS = 10;
  const REFILL_MS = 700;
  const bench = Tailvane.find("bench", "board");
  const box = Tailvane.find("box", "board");
  const none = Tailvane.find("show", "board-none");
  const table = Tailvane.find("list", "board");
  const progress = Tailvane.find("show", "board-progress");
  const form = Tailvane.find("control", "board-form");
  const done = Tailvane.find("show", "board-done");
  const more = Tailvane.find("act", "board-more");
  const onlyUp = Tailvane.find("control", "board-up");
  let made = "";
  let sort = "total_magnitude";
  let descending = false;
  let most = FIRST_ROWS;
  let total = 0;
  let timer = 0;
  let filled = 0;

  const ask = (act) => Tailvane.desk.ask(act);

  function rest(reading, plan) {
    none.hidden = reading.at_site;
    box.hidden = !reading.at_site;
    if (!bench.open || !reading.at_site) {
      return;
    }
    const { comet, time, ...others } = JSON.parse(plan);
    const key = JSON.stringify([ask((desk) => desk.board_key()), others, Tailvane.store.comets().length]);
    if (key !== made) {
      made = key;
      make();
    }
  }

  function make() {
    clearTimeout(timer);
    const before = performance.now();
    const count = ask((desk) => desk.make_board(Tailvane.store.comets()));
    if (!count) {
      return;
    }
    total = count;
    fill();
    table.dataset.milliseconds = String(performance.now() - before);
    lookOn();
  }

  /** Looks at the sunward dust of a few more comets, those shown first. */
  function lookOn() {
    const begun = performance.now();
    let left;
    do {
      left = ask((desk) => desk.board_sunward(1));
    } while (left && performance.now() - begun < PIECE_MS);
    Tailvane.write(progress, left ? "Sunward dust: " + left + " comets still to be looked at." : "");
    if (!left || begun - filled > REFILL_MS) {
      fill();
    }
    if (left && bench.open) {
      timer = setTimeout(lookOn, 4);
    }
  }

  function fill() {
    const answer = ask((desk) => desk.board_rows(sort, descending, onlyUp.checked, most));
    if (!answer) {
      return;
    }
    const [sheet, count] = answer;
    filled = performance.now();
    const empty = count ? "" : "None of the comets at hand (" + total + ") is up in dark time on this night.";
    Tailvane.write(Tailvane.find("show", "board-empty"), empty);
    Tailvane.write(Tailvane.find("show", "board-title"), ask((desk) => desk.board_title()));
    if (!table.tHead.rows.length) {
      table.tHead.append(Tailvane.element("tr", "", ...sheet.columns.map(head)));
    }
    for (const cell of table.tHead.rows[0].cells) {
      const sorted = cell.dataset.column === sort;
      cell.setAttribute("aria-sort", sorted ? (descending ? "descending" : "ascending") : "none");
    }
    const focused = document.activeElement.dataset.comet;
    table.tBodies[0].replaceChildren(
      ...sheet.rows.map((row) => {
        const [name, ...cells] = Tailvane.cells(sheet, row);
        const button = Tailvane.element("button", name.textContent);
        button.type = "button";
        button.className = "bare";
        button.title = "Shows this comet on the sky plane.";
        button.dataset.comet = row.goal;
        button.addEventListener("click", () => pick(row.goal));
        const first = Tailvane.element("th", "", button);
        first.scope = "row";
        return Tailvane.element("tr", "", first, ...cells);
      })
    );
    if (focused !== undefined) {
      const again = table.querySelector('[data-comet="' + focused + '"]');
      again && again.focus();
    }
    more.hidden = count <= most;
  }

  function head([key, words, unit]) {
    const button = Tailvane.element("button", Tailvane.headed(words, unit));
    button.type = "button";
    button.className = "bare";
    button.title = "Sorts by this column; once more, the other way round.";
    button.addEventListener("click", () => {
      descending = sort === key && !descending;
      sort = key;
      refill();
    });
    const cell = Tailvane.element("th", "", button);
    cell.scope = "col";
    cell.dataset.column = key;
    return cell;
  }

  /** Shows it anew, and goes on with what is then in sight. */
  function refill() {
    fill();
    clearTimeout(timer);
    lookOn();
  }

  function pick(number) {
    Tailvane.season.pause();
    Tailvane.desk.change((desk) => desk.board_pick(number));
  }

  function start() {
    Tailvane.desk.onRest(rest);
    bench.addEventListener("toggle", Tailvane.desk.redraw);
    more.addEventListener("click", () => {
      most += 200;
      refill();
    });
    onlyUp.addEventListener("change", refill);
    Tailvane.onAct("save-board", () => Tailvane.save("board.csv", "text/csv", ask((desk) => desk.board_text("csv"))));
    Tailvane.onAct("copy-board", () => Tailvane.copy(ask((desk) => desk.board_text(form.value)), (words) => Tailvane.write(done, words)));
  }

  return { start };
})();
