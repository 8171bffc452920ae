/* The parcel box: what waits on this phone, what the office answered to each, what to do about it. */
"use strict";

(() => {
  const list = document.querySelector("[data-box]");
  if (!list) return;
  const { store, send, say } = underbund;
  const KEEP_ANSWERS_MS = 7 * 24 * 3600 * 1000, LATE_MS = 3 * 24 * 3600 * 1000;
  const pattern = document.querySelector("template#record");
  const state = document.querySelector("[data-state]");

  const when = (text) => new Date(text).toLocaleString(document.documentElement.lang, {
    day: "numeric", month: "short", hour: "2-digit", minute: "2-digit",
  });

  function line(record) {
    const one = pattern.content.cloneNode(true), place = (name) => one.querySelector(`[data-${name}]`);
    const late = record.waits && Date.now() - new Date(record.made) > LATE_MS;
    place("title").textContent = record.title;
    place("made").textContent = say("made", { when: when(record.made), by: record.by });
    const word = place("word");
    word.textContent = say(record.waits ? (late ? "late" : "waits") : record.result);
    word.classList.add({ kept: "done", "already here": "done", held: "doubt", refused: "stop" }[record.result]
      || (late ? "stop" : "doubt"));
    const findings = place("findings");
    for (const finding of record.findings || []) {
      const item = document.createElement("li");
      item.textContent = `${finding.what} ${finding.remedy}`.trim();
      findings.append(item);
    }
    findings.hidden = !findings.children.length;
    const values = Object.entries(record.sends).filter(([key]) => !["id", "type", "site", "device_time", "photos"].includes(key));
    place("values").textContent = values.map(([key, value]) => `${key} ${value}`).join(", ");
    place("photos").textContent = record.sends.photos ? say("photos", { count: record.sends.photos.length }) : "";
    const acts = place("acts");
    acts.hidden = record.result !== "refused";
    place("again").addEventListener("click", () => send.again(record));
    place("drop").addEventListener("click", async () => {
      if (!confirm(say("sure"))) return;
      await store.forget(record);
      draw();
    });
    return one;
  }

  async function draw() {
    const whole = (await store.all("records")).sort((a, b) => (a.made < b.made ? 1 : -1));
    const shown = [];
    for (const record of whole) {
      const done = !record.waits && record.result !== "refused";
      if (done && Date.now() - new Date(record.answered) > KEEP_ANSWERS_MS) await store.forget(record);
      else shown.push(record);
    }
    shown.sort((a, b) => Number(b.waits || b.result === "refused") - Number(a.waits || a.result === "refused"));
    list.replaceChildren(...shown.map(line));
    list.hidden = !shown.length;
    const open = shown.filter((one) => one.waits).length;
    document.querySelector("[data-waiting]").textContent = say(open ? "waiting" : "nothing-waits", { count: open });
  }

  document.addEventListener("underbund:sent", ({ detail }) => {
    state.hidden = !detail;
    state.textContent = detail ? say(detail.why, { words: detail.message }) : "";
    document.querySelector("[data-sign-in]").hidden = !detail || detail.why !== "sign-in";
    draw();
  });
  document.querySelector("[data-send]").addEventListener("click", () => send.now());
  document.querySelector("[data-send]").hidden = false;
  draw().then(() => send.now());
})();
