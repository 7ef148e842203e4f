/*
 * With which plan does the page open, and how does a plan leave it: address, file?
 *
 * A plan in the address comes first; where this tab itself wrote that address, what the tab kept is as new or newer. Then
 * what the tab kept, then an invented comet. A plan that is passed over can be gone back to. Frames may refuse to change
 * their address, so each way is tried and then given up quietly.
 */
Tailvane.plan = (function () {
  const done = Tailvane.find("show", "plan-done");
  const file = Tailvane.find("file", "plan");
  let written = "";
  let turn = 0;

  /** Puts a plan on the desk. Gives what is left for `tell` once the page is there to say it. */
  async function open(invented) {
    const kept = Tailvane.embed.on() ? null : Tailvane.keep.own();
    const hash = location.hash;
    let asked = null;
    let refusal = null;
    if (kept && kept.address === hash) {
      written = hash;
    } else {
      try {
        asked = await Tailvane.link.read(hash);
      } catch (failure) {
        refusal = failure;
      }
    }
    let shown = null;
    for (const plan of [asked, kept && kept.plan, invented]) {
      try {
        if (plan !== null && shown === null) {
          Tailvane.desk.start(plan);
          shown = plan;
        }
      } catch (failure) {
        refusal = refusal || failure;
      }
    }
    return { refusal, instead: shown === invented ? "An invented comet" : "What this tab kept", passed: kept && bare(shown) !== bare(kept.plan) ? kept.plan : null };
  }

  /** Says why a plan that was asked for could not be had; makes one that was passed over a step to go back to. */
  function tell({ refusal, instead, passed }) {
    Tailvane.undo.note(passed);
    if (refusal) {
      Tailvane.say.error(refusal.message + ". " + instead + " is shown instead.");
    }
  }

  /** A plan's text without its layout. */
  function bare(plan) {
    try {
      return JSON.stringify(JSON.parse(plan));
    } catch (broken) {
      return plan;
    }
  }

  /** Writes the plan into the address, unless the desk has moved on before it was packed. */
  async function toAddress(reading, plan) {
    turn += 1;
    const mine = turn;
    const fragment = "#" + Tailvane.embed.prefix() + (await Tailvane.link.write(plan));
    if (mine !== turn || fragment === written || fragment === location.hash) {
      return;
    }
    written = fragment;
    try {
      history.replaceState(null, "", fragment);
    } catch (refused) {
      try {
        location.hash = fragment;
      } catch (refusedToo) {
        // A frame without an address of its own: the plan file and the copied link still work.
      }
    }
    if (!Tailvane.embed.on()) {
      Tailvane.keep.save();
    }
  }

  async function onAddress() {
    const hash = location.hash;
    if (hash === written || Tailvane.link.parts(hash).plan === null) {
      return;
    }
    written = hash;
    try {
      const plan = await Tailvane.link.read(hash);
      Tailvane.desk.change((desk) => desk.set_plan(plan));
    } catch (failure) {
      Tailvane.say.error(failure.message + ". Nothing was changed.");
    }
  }

  const fileName = (ending) => {
    const name = Tailvane.find("show", "comet").textContent.replace(/[^A-Za-z0-9]+/g, "-").replace(/^-|-$/g, "").toLowerCase();
    return (name.slice(0, 60) || "comet") + ending;
  };

  function save() {
    const plan = Tailvane.desk.ask((desk) => desk.plan_json());
    if (plan) {
      Tailvane.save(fileName(".plan.json"), "application/json", plan);
      Tailvane.write(done, "Saved as " + fileName(".plan.json") + ".");
    }
  }

  async function openFile() {
    const chosen = file.files[0];
    file.value = "";
    if (!chosen) {
      return;
    }
    if (chosen.size > Tailvane.link.MOST_IN_PLAN) {
      Tailvane.say.error(chosen.name + ": found " + Math.round(chosen.size / 1000) + " kB; expected a plan of at most " + Tailvane.link.MOST_IN_PLAN / 1000 + " kB");
      Tailvane.write(done, "The plan was not used; nothing was changed.");
      return;
    }
    const took = Tailvane.comet.take(await chosen.text());
    Tailvane.write(done, took === undefined ? "The plan was not used; nothing was changed." : "Opened " + chosen.name + ".");
  }

  function start() {
    Tailvane.desk.onRest(toAddress);
    window.addEventListener("hashchange", onAddress);
    Tailvane.onAct("save-plan", save);
    Tailvane.onAct("open-plan", () => file.click());
    file.addEventListener("change", openFile);
  }

  return { start, open, tell, save, fileName, lastAddress: () => written };
})();
