/* Reading a well on a phone: depth in metres or centimetres, by tape held and wet, or dry; far from
   what is expected it is read twice. It goes into the phone's box, with signal or without. */
"use strict";

(() => {
  const form = document.querySelector("form[data-level]");
  if (!form) return;
  const { store, photo, say } = underbund;
  const about = form.dataset, page = location.pathname;
  const box = (name) => form.elements[name];
  const wrong = form.querySelector("[data-wrong]"), again = form.querySelector("[data-again]");
  const shown = form.querySelector("[data-depth]");
  const METRES = { m: 1, cm: 0.01 };

  const number = (text) => {
    const plain = String(text).trim().replace(",", ".").replace(/\p{Nd}/gu, digit);
    return /^-?\d+(\.\d*)?$/.test(plain) ? Number(plain) : null;
  };
  /* Digits of every script lie in tens whose first is zero. */
  const digit = (sign) => {
    let zero = sign.codePointAt(0);
    while (/\p{Nd}/u.test(String.fromCodePoint(zero - 1)) && sign.codePointAt(0) - zero < 9) zero -= 1;
    return String(sign.codePointAt(0) - zero);
  };
  const metres = (name) => {
    const value = number(box(name).value);
    return value === null ? null : value * METRES[box("unit").value];
  };

  function depth() {
    const hold = number(box("hold").value), wet = number(box("wet").value);
    if (box("hold").value && box("wet").value) return hold === null || wet === null ? null : hold - wet;
    return metres("depth");
  }

  /* The depth in metres is said back while it is typed. */
  function back() {
    const value = depth();
    shown.hidden = value === null;
    if (value !== null) shown.textContent = say("depth", { depth: value.toFixed(2) });
    const far = value !== null && about.low && (value < Number(about.low) || value > Number(about.high));
    again.hidden = !(far || box("again").value);
    return far;
  }

  const tell = (word, at) => {
    wrong.hidden = false;
    wrong.textContent = say(word);
    if (at) at.focus();
  };

  const when = () => {
    const now = new Date(), two = (value) => String(value).padStart(2, "0");
    if (!about.still) {
      box("day").value = `${now.getFullYear()}-${two(now.getMonth() + 1)}-${two(now.getDate())}`;
      box("hour").value = `${two(now.getHours())}:${two(now.getMinutes())}`;
    }
  };

  function read() {
    const dry = box("dry").value === "yes", state = box("state").value;
    const values = {
      well: about.level, mark: about.mark, state, dry: dry ? "yes" : "no", note: box("note").value.trim(),
      read_at: `${box("day").value}T${box("hour").value}${about.offset}`, read_by: about.person,
    };
    if (dry || ["obstructed", "flowing", "flooded"].includes(state)) return values;
    const value = depth();
    if (value === null) { tell("no-depth", box("depth")); return null; }
    if (box("hold").value && box("wet").value) {
      return { ...values, hold_m: number(box("hold").value), wet_m: number(box("wet").value) };
    }
    if (back() && !box("again").value) { tell("read-again", box("again")); return null; }
    const second = box("again").value ? metres("again") : null;
    return { ...values, depth_m: Number(value.toFixed(4)), ...(second === null ? null : { again_m: Number(second.toFixed(4)) }) };
  }

  async function keep() {
    const values = read();
    if (!values) return;
    const pictures = [];
    try {
      for (const file of box("photo") ? box("photo").files : []) {
        pictures.push(await photo.take(file, { site: about.site, what: about.level, withPlace: false }));
      }
    } catch {
      tell("bad-photo");
      return;
    }
    const made = new Date().toISOString();
    const sends = {
      id: crypto.randomUUID(), type: "level", device_time: made, ...values,
      ...(pictures.length ? { photos: pictures.map((one) => one.id) } : null),
    };
    const record = { id: sends.id, sends, by: about.person, made, title: about.title, page, waits: true, result: "", findings: [] };
    await store.keep(record, pictures, page);
    if (navigator.storage && navigator.storage.persist) navigator.storage.persist();
    location.assign(about.next || underbund.addresses.box);
  }

  const names = ["depth", "unit", "hold", "wet", "again", "dry", "state", "note"];
  const draft = () => store.put("drafts", {
    page, at: 0, values: Object.fromEntries(names.map((name) => [name, box(name).value])),
  });
  form.addEventListener("input", () => { wrong.hidden = true; back(); draft(); });
  form.addEventListener("submit", (event) => { event.preventDefault(); keep(); });
  form.noValidate = true;
  when();
  store.get("drafts", page).then((found) => {
    if (found) names.forEach((name) => { if (found.values[name]) box(name).value = found.values[name]; });
    back();
  });
})();
