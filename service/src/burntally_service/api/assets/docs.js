"use strict";

// Gives life to the forms of the page; everything else on it reads without scripts.

const pathOf = (form) => {
  let path = form.dataset.path;
  for (const input of form.querySelectorAll("input")) {
    path = path.replace(`{${input.name}}`, encodeURIComponent(input.value));
  }
  return path;
};

const shown = (text) => {
  try {
    return JSON.stringify(JSON.parse(text), null, 2);
  } catch {
    return text;
  }
};

const send = async (form) => {
  const body = form.querySelector("textarea");
  const request = { method: form.dataset.method, headers: { Accept: "application/json" } };
  if (body) {
    request.body = body.value;
    request.headers["Content-Type"] = "application/json";
  }
  const response = await fetch(pathOf(form), request);
  return `${response.status} ${response.statusText}\n\n${shown(await response.text())}`;
};

for (const trial of document.querySelectorAll(".trial")) {
  trial.hidden = false;
  const form = trial.querySelector("form");
  const output = form.querySelector("output");
  form.addEventListener("submit", async (event) => {
    event.preventDefault();
    const answer = document.createElement("pre");
    try {
      answer.textContent = await send(form);
    } catch (error) {
      answer.textContent = `The service did not answer: ${error.message}`;
    }
    output.replaceChildren(answer);
  });
}
