/*
 * What is said in words: headline, sentence, cautions, errors?
 *
 * The visible words follow every frame; a screen reader hears them once scrubbing rests. An error stays until something
 * succeeds, and names the place of the fault.
 */
Tailvane.say = (function () {
  const headline = Tailvane.find("say", "headline");
  const sentence = Tailvane.find("say", "sentence");
  const visibility = Tailvane.find("show", "visibility");
  const errorBox = Tailvane.find("say", "error");
  const strongList = Tailvane.find("list", "strong-cautions");
  const quietList = Tailvane.find("list", "cautions");
  const spoken = Tailvane.find("show", "spoken");

  function frame(reading) {
    Tailvane.write(Tailvane.find("show", "comet"), reading.comet);
    Tailvane.write(Tailvane.find("show", "observer"), reading.observer);
    Tailvane.write(headline, reading.headline);
    Tailvane.write(sentence, reading.sentence);
    Tailvane.write(visibility, reading.visibility);
    fill(strongList, reading.cautions.filter((caution) => caution.weight === "danger"));
    fill(quietList, reading.cautions.filter((caution) => caution.weight !== "danger"));
  }

  /** Shows cautions as list items; touches the list only when it differs. */
  function fill(list, cautions) {
    const key = cautions.map((caution) => caution.weight + caution.words).join("\n");
    if (list.dataset.key === key) {
      return;
    }
    list.dataset.key = key;
    list.hidden = cautions.length === 0;
    list.replaceChildren(
      ...cautions.map((caution) => {
        const item = document.createElement("li");
        item.dataset.say = "caution";
        item.dataset.weight = caution.weight;
        item.textContent = caution.words;
        return item;
      })
    );
  }

  function rest(reading) {
    const danger = reading.cautions.filter((caution) => caution.weight === "danger").map((caution) => caution.words);
    Tailvane.write(spoken, [reading.time_words, ...danger, reading.headline, reading.sentence].join(" "));
  }

  function error(message) {
    errorBox.hidden = false;
    Tailvane.write(errorBox, message);
  }

  function clearError() {
    errorBox.hidden = true;
    errorBox.textContent = "";
  }

  return {
    start: () => {
      Tailvane.desk.onFrame(frame);
      Tailvane.desk.onRest(rest);
    },
    error,
    clearError,
    lastError: () => errorBox.textContent,
  };
})();
