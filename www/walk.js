/*
 * How is a newcomer, or a new member of a team, led through an apparition?
 *
 * A walk is a list of steps, each a title, a text and an ordinary plan. One comes with the page; a team opens its own: a
 * list file with the plan files that it names. The plan from before the walk comes back when the walk is left.
 */
Tailvane.walk = (function () {
  const MOST_STEPS = 100;
  const MOST_LETTERS = 2000;
  const panel = Tailvane.find("box", "walk");
  const file = Tailvane.find("file", "walk");
  const show = (name) => Tailvane.find("show", name);
  let steps = [];
  let at = 0;
  let before = null;

  function refuse(found, expected) {
    throw { refused: true, message: "The walk: found " + found + "; expected " + expected };
  }

  /** The steps of a list; `planOf(name)` gives the text of a plan file. Throws a refusal. */
  function read(text, planOf) {
    let list;
    try {
      list = JSON.parse(text);
    } catch (broken) {
      refuse("a list that is no JSON", "`tailvane_walk` and `steps`");
    }
    if (!list || list.tailvane_walk !== 1 || !Array.isArray(list.steps) || list.steps.length === 0 || list.steps.length > MOST_STEPS) {
      refuse("no walk of version 1", "`\"tailvane_walk\": 1` and 1 to " + MOST_STEPS + " `steps`");
    }
    return list.steps.map((step, number) => {
      const where = "step " + (number + 1);
      for (const key of ["title", "text"]) {
        if (!step || typeof step[key] !== "string" || step[key] === "" || step[key].length > MOST_LETTERS) {
          refuse("no `" + key + "` in " + where, "1 to " + MOST_LETTERS + " characters");
        }
      }
      const plan = typeof step.plan === "string" ? planOf(step.plan) : step.plan && JSON.stringify(step.plan);
      if (!plan) {
        refuse("no plan for " + where, "a plan, or the name of a plan file opened with the list");
      }
      try {
        Tailvane.core.exports().plan_name(plan);
      } catch (refusal) {
        refuse("in the plan of " + where + ": " + refusal.message, "a plan");
      }
      return { title: step.title, text: step.text, plan };
    });
  }

  function go(number) {
    at = Math.max(0, Math.min(steps.length - 1, number));
    const step = steps[at];
    Tailvane.season.pause();
    Tailvane.desk.change((desk) => {
      desk.set_plan(step.plan);
      desk.reset_view();
    });
    Tailvane.write(show("walk-title"), at + 1 + " of " + steps.length + ": " + step.title);
    Tailvane.write(show("walk-text"), step.text);
    Tailvane.find("act", "walk-back").setAttribute("aria-disabled", String(at === 0));
    Tailvane.write(Tailvane.find("act", "walk-next"), at === steps.length - 1 ? "End" : "Next");
  }

  function begin(found) {
    steps = found;
    before = before || Tailvane.desk.ask((desk) => desk.plan_json());
    panel.hidden = false;
    go(0);
    window.scrollTo(0, 0);
    Tailvane.find("act", "walk-next").focus();
  }

  function leave() {
    panel.hidden = true;
    const plan = before;
    before = null;
    Tailvane.desk.change((desk) => desk.set_plan(plan));
    Tailvane.find("act", "walk").focus();
  }

  const next = () => (at === steps.length - 1 ? leave() : go(at + 1));

  async function openFiles() {
    const chosen = [...file.files];
    file.value = "";
    if (chosen.length === 0) {
      return;
    }
    try {
      if (chosen.reduce((sum, one) => sum + one.size, 0) > Tailvane.link.MOST_IN_PLAN) {
        refuse("over " + Tailvane.link.MOST_IN_PLAN / 1000 + " kB", "at most that in all its files");
      }
      const texts = new Map(await Promise.all(chosen.map(async (one) => [one.name, await one.text()])));
      const list = [...texts.keys()].find((name) => name.endsWith(".walk.json")) || "";
      if (!list) {
        refuse("no file named *.walk.json", "the list, and the plan files it names, opened together");
      }
      begin(read(texts.get(list), (name) => texts.get(name)));
      Tailvane.say.clearError();
    } catch (failure) {
      Tailvane.say.error(failure.message + ". Nothing was changed.");
    }
  }

  function start() {
    Tailvane.onAct("walk", async () => {
      const text = (await Tailvane.core.words()).walk;
      if (text) {
        begin(read(JSON.stringify(text)));
      }
    });
    Tailvane.onAct("open-walk", () => file.click());
    file.addEventListener("change", openFiles);
    Tailvane.onAct("walk-back", () => at > 0 && go(at - 1));
    Tailvane.onAct("walk-next", next);
    Tailvane.onAct("walk-leave", leave);
    panel.addEventListener("keydown", (event) => {
      const acts = { ArrowRight: () => at < steps.length - 1 && go(at + 1), ArrowLeft: () => go(at - 1), Escape: leave };
      if (acts[event.key]) {
        event.preventDefault();
        acts[event.key]();
      }
    });
  }

  return { start, before: () => before };
})();
