/**
 * The page that Excel loads. functions.js, the script before this one, has registered the formulas by now, since nothing of
 * theirs waits for the pane; the pane's own code is loaded afterwards.
 */
import "./pane.css";
import { missingSets, showNotice } from "./requirements";
import { followTheme } from "./theme";

const root = document.createElement("div");
root.id = "pane";
document.body.append(root);

/** Whether the host's script had defined, when functions.js ran before this one, what the formulas register with. */
const registeredAtOnce = "CustomFunctions" in window;

if (typeof Office === "undefined") {
  showNotice(root, "Excel's script could not be loaded", [
    "This page needs office.js, which Excel's own address serves. Check the connection, then close and open the pane.",
    "Without Excel, open the practice workbook instead.",
  ]);
} else {
  void Office.onReady().then(({ host }) => start(host));
}

async function start(host: Office.HostType | null): Promise<void> {
  if (host !== Office.HostType.Excel) {
    showNotice(root, "This page belongs in Excel", ["Install the add-in with its manifest.xml and open the pane from the Home tab. Without Excel, open the practice workbook instead."]);
    return;
  }
  const missing = missingSets((set, version) => Office.context.requirements.isSetSupported(set, version));
  if (missing.length > 0) {
    showNotice(root, "This version of Excel is too old", ["It lacks:", "Update Excel (Microsoft 365, Excel 2021 or newer, or Excel on the web). The workbook itself is not changed."], missing);
    return;
  }
  if (!registeredAtOnce && "CustomFunctions" in window) document.head.append(Object.assign(document.createElement("script"), { src: "functions.js" }));
  // So that formulas answer as soon as a workbook with them is opened, before anyone opens the pane.
  void Office.addin.setStartupBehavior(Office.StartupBehavior.load).catch(() => undefined);
  try {
    const [{ mountPane }, { excelWorkbook }] = await Promise.all([import("../../pane/mount"), import("./workbook")]);
    const pane = mountPane(root, excelWorkbook());
    followTheme(Office.context, (theme) => pane.setTheme(theme));
  } catch (error) {
    showNotice(root, "The pane could not be loaded", [error instanceof Error ? error.message : String(error), "The formulas work without it. Close and open the pane to try again."]);
  }
}
