/* A photo chosen on a page that is sent at once: when it was taken, and where, if that is allowed. */
"use strict";

(() => {
  const box = document.querySelector("input[type=file][data-with-place]");
  if (!box) return;
  const put = (name, value) => { box.form.elements[name].value = value; };
  box.addEventListener("change", () => {
    const [file] = box.files;
    if (!file) return;
    put("taken_at", new Date(file.lastModified).toISOString());
    if (!navigator.geolocation) return;
    navigator.geolocation.getCurrentPosition(({ coords }) => {
      put("lat", coords.latitude);
      put("lon", coords.longitude);
      put("accuracy_m", coords.accuracy);
    }, () => {}, { enableHighAccuracy: true, timeout: 15000, maximumAge: 60000 });
  });
})();
