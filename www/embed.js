/*
 * How does the page live in a frame of another page?
 *
 * Compact: sky plane, time control, words. Nothing is kept, no storage is needed, and nothing is drawn out of sight.
 *
 * | message | from, to | meaning |
 * | --- | --- | --- |
 * | `{ tailvane: "ready" }` | frame to host | a plan may be sent |
 * | `{ tailvane: "height", height }` | frame to host | the pixels that the content takes |
 * | `{ tailvane: "plan", plan }` | host to frame | the JSON text of a plan to show |
 *
 * Anything else that comes in is ignored. What goes out holds nothing of the plan, so it may go to any host.
 */
Tailvane.embed = (function () {
  const PARTS = ["sky", "almanac", "season", "clock", "say", "plan", "embed"];
  const asked = Tailvane.link.parts(location.hash);
  // A frame made from text has no address to carry a plan; it waits for one from its host.
  const embedded = asked.embed || location.protocol === "about:";
  const root = document.documentElement;
  const whole = Tailvane.find("show", "whole");
  let sent = 0;

  if (embedded) {
    root.dataset.embed = "yes";
  }

  const tell = (message) => window.parent !== window && window.parent.postMessage(message, "*");

  function tellHeight() {
    const height = Math.ceil(document.body.getBoundingClientRect().height);
    if (height !== sent) {
      sent = height;
      tell({ tailvane: "height", height });
    }
  }

  function onMessage(event) {
    const data = event.data;
    if (window.parent === window || event.source !== window.parent || typeof data !== "object" || data === null) {
      return;
    }
    if (data.tailvane !== "plan" || typeof data.plan !== "string") {
      return;
    }
    if (data.plan.length > Tailvane.link.MOST_IN_PLAN) {
      Tailvane.say.error("The plan from the page around: found " + Math.round(data.plan.length / 1000) + " kB; expected at most " + Tailvane.link.MOST_IN_PLAN / 1000 + " kB");
      return;
    }
    Tailvane.season.pause();
    Tailvane.desk.change((desk) => desk.set_plan(data.plan));
  }

  /** Opens the whole page, or shows its address where the host lets no window be opened. */
  async function openWhole(event) {
    event.preventDefault();
    const address = whole.href;
    let opened = null;
    try {
      opened = window.open(address, "_blank");
    } catch (refused) {
      // Some browsers give nothing, some throw.
    }
    if (opened) {
      opened.opener = null;
    } else {
      Tailvane.copy(address, (said) => Tailvane.notice("The page around lets no window be opened. Address of the whole page: " + said));
    }
  }

  function start() {
    Tailvane.tails.restoreLayers();
    const themes = [...Tailvane.find("control", "theme").options].map((option) => option.value);
    if (themes.includes(asked.colours)) {
      Tailvane.theme.wear(asked.colours);
    }
    if (location.protocol !== "about:") {
      whole.hidden = false;
      whole.addEventListener("click", openWhole);
      Tailvane.desk.onRest(async (reading, plan) => {
        whole.href = location.href.split("#")[0] + "#" + (await Tailvane.link.write(plan));
      });
    }
    const plane = Tailvane.find("box", "sky");
    // The wheel scrolls the page around, unless one works in the sky.
    plane.addEventListener("wheel", (event) => !event.ctrlKey && !plane.contains(document.activeElement) && event.stopPropagation(), { capture: true });
    new IntersectionObserver((entries) => Tailvane.desk.setSeen(entries[entries.length - 1].isIntersecting)).observe(document.body);
    new ResizeObserver(tellHeight).observe(document.body);
    window.addEventListener("message", onMessage);
    tell({ tailvane: "ready" });
  }

  const prefix = () => (embedded ? "embed" + (asked.colours ? "=" + asked.colours : "") + "&" : "");

  return { PARTS, start, on: () => embedded, prefix };
})();
