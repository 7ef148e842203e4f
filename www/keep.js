/*
 * How is no work ever lost?
 *
 * Each tab keeps its plan and its typed but unread text in a place of its own in the browser's store: a moment after every
 * change, and when the page goes away. A tab without changes keeps nothing. Places of other tabs, and of earlier visits, are
 * offered under Comet. Two tabs can come to one place only by doubling a tab: whoever sees the other's mark in it moves to a
 * new place, says so, and offers the other plan. What is read is text until the core has read it.
 */
Tailvane.keep = (function () {
  const SLOT = "slot.";
  const MOST_SLOTS = 20;
  const MOST_DRAFT = 200000;
  const REST_MS = 400;
  const list = Tailvane.find("list", "left");
  const page = Math.random().toString(36).slice(2);
  const typed = new Map();
  let place = "";
  let readMark = "";
  let opened = null;
  let keeps = false;
  let refusedOnce = false;
  let timer = 0;
  let putBackDrafts = null;

  /** What lies in a place: plan, time, address, mark of the page that wrote it, drafts; null for anything else. */
  function look(key) {
    try {
      const slot = JSON.parse(Tailvane.store.read(key));
      if (typeof slot.plan !== "string" || slot.plan.length > Tailvane.link.MOST_IN_PLAN || typeof slot.saved !== "number") {
        return null;
      }
      return { ...slot, drafts: slot.drafts && typeof slot.drafts === "object" ? slot.drafts : {} };
    } catch (broken) {
      return null;
    }
  }

  /** What this tab left, or null. */
  function own() {
    place = Tailvane.store.tab("slot") || "";
    const slot = place ? look(SLOT + place) : null;
    if (slot) {
      readMark = slot.by;
      keeps = true;
      putBackDrafts = slot.drafts;
    }
    return slot;
  }

  function newPlace() {
    place = Date.now().toString(36) + page.slice(0, 6);
    readMark = page;
    Tailvane.store.tab("slot", place);
  }

  const isDraft = (element) => element.id && (element.tagName === "TEXTAREA" || (element.tagName === "INPUT" && element.type === "text"));

  /** What was typed and is still as it was typed. */
  function drafts() {
    const found = {};
    for (const [element, value] of typed) {
      if (element.isConnected && element.value === value && value !== "") {
        found[element.id] = value.slice(0, MOST_DRAFT);
      }
    }
    const pasted = Tailvane.find("input", "elements");
    if (pasted.value !== "") {
      found[pasted.id] = pasted.value.slice(0, MOST_DRAFT);
    }
    return found;
  }

  function save() {
    clearTimeout(timer);
    // A walk's plans are only looked at.
    const plan = Tailvane.walk.before() || Tailvane.desk.ask((desk) => desk.plan_json());
    if (!plan) {
      return;
    }
    const unread = drafts();
    if (!keeps && (opened === null || plan === opened) && Object.keys(unread).length === 0) {
      return;
    }
    if (!place) {
      newPlace();
    }
    const there = look(SLOT + place);
    if (there && there.by !== page && there.by !== readMark) {
      apart(there);
      return;
    }
    readMark = page;
    keeps = true;
    const kept = Tailvane.store.write(SLOT + place, JSON.stringify({ plan, saved: Date.now(), address: Tailvane.plan.lastAddress(), by: page, drafts: unread }));
    if (!kept && !refusedOnce) {
      refusedOnce = true;
      Tailvane.notice("This browser does not let the page keep your work: its store is full or switched off. Save the plan as a file before you leave.", ["Save the plan", Tailvane.plan.save]);
    }
    if (kept) {
      refusedOnce = false;
      const others = slots();
      others.slice(MOST_SLOTS).forEach(({ key }) => Tailvane.store.remove(key));
    }
  }

  /** Another tab writes to this place: leave it to that tab. */
  function apart(theirs) {
    newPlace();
    keeps = true;
    save();
    Tailvane.notice("Another tab is working on the same plan. This tab now keeps its own, and neither overwrites the other.", [
      "Take the other tab's plan",
      () => Tailvane.comet.take(theirs.plan),
    ]);
  }

  const saveSoon = () => {
    clearTimeout(timer);
    timer = setTimeout(save, REST_MS);
  };

  /** All places but this tab's, the latest first. */
  function slots() {
    return Tailvane.store
      .keys(SLOT)
      .filter((key) => key !== SLOT + place)
      .map((key) => ({ key, slot: look(key) }))
      .filter(({ slot }) => slot)
      .sort((a, b) => b.slot.saved - a.slot.saved);
  }

  function listOthers() {
    const items = [];
    for (const { key, slot } of slots()) {
      let name;
      try {
        name = Tailvane.core.exports().plan_name(slot.plan);
      } catch (refused) {
        continue;
      }
      const about = "left " + new Date(slot.saved).toISOString().slice(0, 16).replace("T", " ") + " UTC";
      items.push(
        Tailvane.comet.pick(name, about, () => Tailvane.comet.take(slot.plan), () => {
          Tailvane.store.remove(key);
          listOthers();
        })
      );
    }
    list.replaceChildren(...items);
    Tailvane.find("box", "left").hidden = items.length === 0;
  }

  function putBack() {
    const found = putBackDrafts;
    putBackDrafts = null;
    for (const [id, text] of Object.entries(found)) {
      const element = document.getElementById(id);
      if (!element || !isDraft(element) || typeof text !== "string") {
        continue;
      }
      if (element === Tailvane.find("input", "elements")) {
        Tailvane.comet.putBack(text);
      } else if (element.value !== text) {
        element.value = text;
        element.dispatchEvent(new Event("input", { bubbles: true }));
      }
    }
  }

  function start() {
    document.addEventListener("input", (event) => {
      if (isDraft(event.target)) {
        typed.set(event.target, event.target.value);
        saveSoon();
      }
    });
    // The forms are filled by the first frame; what was typed is put back over that.
    Tailvane.desk.onFrame(() => {
      if (opened === null) {
        opened = Tailvane.desk.ask((desk) => desk.plan_json());
      }
      if (putBackDrafts) {
        putBack();
      }
    });
    Tailvane.desk.onRest(save);
    window.addEventListener("pagehide", save);
    document.addEventListener("visibilitychange", () => document.visibilityState === "hidden" && save());
    window.addEventListener("storage", (event) => {
      if (!event.key || !event.key.startsWith(Tailvane.store.PREFIX + SLOT)) {
        return;
      }
      const theirs = event.key === Tailvane.store.PREFIX + SLOT + place ? look(SLOT + place) : null;
      if (theirs && theirs.by !== page) {
        apart(theirs);
      }
      listOthers();
    });
    listOthers();
  }

  return { start, own, save };
})();
