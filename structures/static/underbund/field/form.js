/* A form of the stream bed: one question a screen, kept half-filled, and put into the phone's box
   when it is done. Without this script the same form goes straight to the office. */
"use strict";

(() => {
  const form = document.querySelector("form[data-record]");
  if (!form) return;
  const { store, photo, say } = underbund;
  const about = form.dataset, page = location.pathname;
  const steps = [...form.querySelectorAll("[data-step]")];
  const last = form.querySelector("[data-last]");
  const count = form.querySelector("[data-count]"), wrong = form.querySelector("[data-wrong]");
  const back = form.querySelector("[data-back]"), next = form.querySelector("[data-next]");
  let at = 0;

  const boxes = (inside) => [...inside.querySelectorAll("input, select, textarea")].filter((one) => one.name);
  const isOpen = (one) => one.type !== "radio" && one.type !== "checkbox" ? one.value !== "" : one.checked;
  const typed = () => Object.fromEntries(
    boxes(form).filter((one) => one.type !== "file" && one.type !== "hidden" && isOpen(one))
      .map((one) => [one.name, one.value]),
  );

  /* On the phone itself it is today, unless the district stands still on a day of its own. */
  function today() {
    const day = form.querySelector("input[name=day]"), hour = form.querySelector("input[name=looked_at]");
    const now = new Date(), two = (number) => String(number).padStart(2, "0");
    if (day && !about.still) day.value = `${now.getFullYear()}-${two(now.getMonth() + 1)}-${two(now.getDate())}`;
    if (hour) hour.value = `${two(now.getHours())}:${two(now.getMinutes())}`;
  }

  function show(place, { focus = true } = {}) {
    at = Math.max(0, Math.min(place, steps.length - 1));
    steps.forEach((one, number) => { one.hidden = number !== at; });
    last.hidden = at !== steps.length - 1;
    next.hidden = !last.hidden;
    back.hidden = at === 0;
    wrong.hidden = true;
    count.textContent = say("step", { at: at + 1, of: steps.length });
    const first = boxes(steps[at])[0];
    if (focus && first) first.focus();
  }

  /* The browser's own words for what is missing, at the question where it is missing. */
  function lacks(step) {
    const bad = boxes(step).find((one) => !one.checkValidity());
    if (!bad) return false;
    wrong.hidden = false;
    wrong.textContent = bad.validationMessage;
    bad.focus();
    return true;
  }

  async function begin() {
    today();
    const draft = await store.get("drafts", page);
    for (const one of draft ? boxes(form) : []) {
      if (one.type === "file" || one.type === "hidden" || !(one.name in draft.values)) continue;
      if (one.type === "radio" || one.type === "checkbox") one.checked = one.value === draft.values[one.name];
      else one.value = draft.values[one.name];
    }
    form.classList.add("one-by-one");
    show(draft ? Math.min(draft.at, steps.length - 1) : 0, { focus: false });
  }

  const draw = () => store.put("drafts", { page, at, values: typed() });

  async function photos(names) {
    const files = [...form.querySelectorAll("input[type=file]")].flatMap((one) => [...one.files]);
    const allowed = form.querySelector("[data-place]");
    const taken = [];
    for (const file of files) {
      taken.push(await photo.take(file, {
        site: about.site, what: about.title, withPlace: Boolean(allowed && allowed.checked),
      }));
    }
    names.push(...taken.map((one) => one.id));
    return taken;
  }

  async function keep() {
    const values = typed(), names = [];
    delete values.place;
    let pictures;
    try {
      pictures = await photos(names);
    } catch {
      wrong.hidden = false;
      wrong.textContent = say("bad-photo");
      return;
    }
    const made = new Date();
    const sends = {
      id: crypto.randomUUID(), type: about.record, site: about.site, device_time: made.toISOString(),
      ...(about.strip ? { strip: Number(about.strip) } : null), ...(names.length ? { photos: names } : null),
      ...(about.hold && !values.hold ? { hold: about.hold } : null), ...values,
    };
    await store.keep(
      { id: sends.id, sends, by: about.person, made: made.toISOString(), title: about.title, page, waits: true, result: "", findings: [] },
      pictures, page,
    );
    if (navigator.storage && navigator.storage.persist) navigator.storage.persist();
    location.assign(underbund.addresses.box);
  }

  next.addEventListener("click", () => { if (!lacks(steps[at])) { show(at + 1); draw(); } });
  back.addEventListener("click", () => { show(at - 1); draw(); });
  form.addEventListener("input", draw);
  form.addEventListener("submit", (event) => {
    event.preventDefault();
    if (at < steps.length - 1) { next.click(); return; }
    const missing = steps.findIndex((one) => boxes(one).some((box) => !box.checkValidity()));
    if (missing >= 0) { show(missing); lacks(steps[missing]); return; }
    last.querySelector("button").disabled = true;
    keep().finally(() => { last.querySelector("button").disabled = false; });
  });
  form.noValidate = true;
  begin();
})();
