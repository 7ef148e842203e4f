/*
 * How does one go back?
 *
 * A bounded list of plans, one for each time the desk came to rest. A text field keeps its own undo.
 */
Tailvane.undo = (function () {
  const MOST = 200;
  const MOST_BYTES = 4000000;
  const past = [];
  const future = [];
  let current = null;

  const show = () => {
    for (const [name, plans] of [["undo", past], ["redo", future]]) {
      Tailvane.find("act", name).setAttribute("aria-disabled", String(plans.length === 0));
    }
  };

  /** Notes the plan as it is now; the one before can be gone back to. */
  function note(plan) {
    if (!plan || plan === current) {
      return;
    }
    if (current !== null) {
      past.push(current);
      future.length = 0;
    }
    current = plan;
    let bytes = past.reduce((sum, kept) => sum + kept.length, 0);
    while (past.length > MOST || (bytes > MOST_BYTES && past.length > 1)) {
      bytes -= past.shift().length;
    }
    show();
  }

  function step(from, to) {
    note(Tailvane.desk.ask((desk) => desk.plan_json()));
    if (from.length === 0) {
      return;
    }
    const plan = from.pop();
    to.push(current);
    current = plan;
    Tailvane.season.pause();
    Tailvane.desk.change((desk) => desk.set_plan(plan));
    show();
  }

  const undo = () => step(past, future);
  const redo = () => step(future, past);

  const typing = (element) =>
    element.tagName === "TEXTAREA" || element.isContentEditable || (element.tagName === "INPUT" && ["text", "search", "number"].includes(element.type));

  function start() {
    Tailvane.desk.onRest((reading, plan) => note(plan));
    Tailvane.onAct("undo", undo);
    Tailvane.onAct("redo", redo);
    document.addEventListener("keydown", (event) => {
      const key = event.key.toLowerCase();
      if (!(event.ctrlKey || event.metaKey) || event.altKey || !["z", "y"].includes(key) || typing(event.target)) {
        return;
      }
      event.preventDefault();
      (key === "y" || event.shiftKey ? redo : undo)();
    });
    show();
  }

  return { start, note };
})();
