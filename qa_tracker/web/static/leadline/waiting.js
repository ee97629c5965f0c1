/* Looks again until a dossier is drawn: the page answers with nothing new (304) while it is not. */
"use strict";
(() => {
  const state = document.querySelector("[data-waits]");
  if (!state) return;
  let tag = "";
  let pause = 1500;
  const look = async () => {
    try {
      const answer = await fetch(state.dataset.waits, { headers: tag ? { "If-None-Match": tag } : {}, cache: "no-store" });
      const now = answer.headers.get("ETag") || "";
      if (answer.ok && (now === "" || (tag !== "" && now !== tag))) { location.reload(); return; }
      if (answer.ok) tag = now;
      pause = Math.min(pause * 1.3, 10000);
    } catch {
      pause = 10000;
    }
    setTimeout(look, pause);
  };
  setTimeout(look, pause);
})();
