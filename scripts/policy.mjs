/**
 * The content security policy of every page, stated once: the pages carry it as a meta element, the
 * local servers send it as a header, and the browser tests read it from here.
 *
 * 'wasm-unsafe-eval' lets the browser compile the WebAssembly kernel; nothing else is loosened. Styles
 * set through the style object in code are not "inline" to the policy; style attributes in markup are.
 */
export const HOST_SCRIPT = "https://appsforoffice.microsoft.com";

/**
 * @param {{ hostScript: boolean }} page whether the page loads the script of the spreadsheet host
 * @returns {string}
 */
export function contentPolicy({ hostScript }) {
  const host = hostScript ? ` ${HOST_SCRIPT}` : "";
  return [
    "default-src 'none'",
    `script-src 'self' 'wasm-unsafe-eval'${host}`,
    "style-src 'self'",
    "img-src 'self' data: blob:",
    `connect-src 'self'${host}`,
    "worker-src 'self'",
    "base-uri 'none'",
    "form-action 'none'",
    "object-src 'none'",
  ].join("; ");
}

/** Whether the page of this name loads the host's script. @param {string} fileName */
export const loadsHostScript = (fileName) => fileName === "pane.html";
