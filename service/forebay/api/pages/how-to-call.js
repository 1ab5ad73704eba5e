"use strict";

// The examples name the address at which this page was read, whatever a proxy puts before it.
const base = new URL("..", location.href).href.replace(/\/$/, "");
for (const code of document.querySelectorAll("code")) {
  code.textContent = code.textContent.replaceAll("http://127.0.0.1:8620", base);
}
