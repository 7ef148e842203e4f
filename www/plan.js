/*
 * How does a plan leave the page and come back: file, link, drawing?
 *
 * The fragment `#plan=` carries the plan's JSON, percent-encoded. It never leaves the machine: browsers do not
 * send fragments. Frames may refuse to change the address, so each way is tried and then given up quietly.
 */
Tailvane.plan = (function () {
  const KEY = "#plan=";
  const done = Tailvane.find("show", "plan-done");
  const file = Tailvane.find("file", "plan");
  let written = "";

  /** The plan in the address, or null; throws a refusal for text that is not percent-encoded. */
  function fromAddress() {
    if (!location.hash.startsWith(KEY)) {
      return null;
    }
    try {
      return decodeURIComponent(location.hash.slice(KEY.length));
    } catch (broken) {
      throw { refused: true, message: "The plan in the address: found broken percent-encoding; expected the JSON of a plan, percent-encoded" };
    }
  }

  function fragmentOf(plan) {
    // Parentheses and quotes end a link in many wikis and mails.
    return KEY + encodeURIComponent(JSON.stringify(JSON.parse(plan))).replace(/[!'()*]/g, (c) => "%" + c.charCodeAt(0).toString(16).toUpperCase());
  }

  function toAddress(reading, plan) {
    const fragment = fragmentOf(plan);
    if (fragment === written || fragment === location.hash) {
      written = fragment;
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
  }

  function onAddress() {
    if (location.hash === written || !location.hash.startsWith(KEY)) {
      return;
    }
    written = location.hash;
    Tailvane.desk.change((desk) => desk.set_plan(fromAddress()));
  }

  function link() {
    const plan = Tailvane.desk.ask((desk) => desk.plan_json());
    return plan && location.href.split("#")[0] + fragmentOf(plan);
  }

  const fileName = (ending) => {
    const name = Tailvane.find("show", "comet").textContent.replace(/[^A-Za-z0-9]+/g, "-").replace(/^-|-$/g, "").toLowerCase();
    return (name || "comet") + ending;
  };

  async function openFile() {
    const chosen = file.files[0];
    file.value = "";
    if (!chosen) {
      return;
    }
    const text = await chosen.text();
    const took = Tailvane.comet.take(text);
    Tailvane.write(done, took === undefined ? "The plan was not used; nothing was changed." : "Opened " + chosen.name + ".");
  }

  function start() {
    Tailvane.desk.onRest(toAddress);
    window.addEventListener("hashchange", onAddress);
    Tailvane.onAct("save-plan", () => {
      const plan = Tailvane.desk.ask((desk) => desk.plan_json());
      if (plan) {
        Tailvane.save(fileName(".plan.json"), "application/json", plan);
        Tailvane.write(done, "Saved as " + fileName(".plan.json") + ".");
      }
    });
    Tailvane.onAct("open-plan", () => file.click());
    file.addEventListener("change", openFile);
    Tailvane.onAct("copy-link", () => {
      const address = link();
      if (address) {
        Tailvane.copy(address, (words) => Tailvane.write(done, words));
      }
    });
    Tailvane.onAct("save-svg", () => {
      const svg = Tailvane.desk.ask((desk) => desk.svg(Tailvane.theme.name()));
      if (svg) {
        Tailvane.save(fileName("-sky.svg"), "image/svg+xml", svg);
        Tailvane.write(done, "Saved as " + fileName("-sky.svg") + ".");
      }
    });
  }

  return { start, fromAddress, fileName };
})();
