/** Opening and saving .xlsx files. The code that reads and writes them is loaded when it is first used. */
import type { Book, BookFile } from "../engine";
import type { Banner } from "./banner";
import { el, word } from "./dom";
import type { Session } from "./session";

const TYPE = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet";

export class Files {
  readonly words: readonly HTMLElement[];
  private readonly chooser = el("input", { type: "file", accept: `.xlsx,${TYPE}`, hidden: true, "aria-label": "An .xlsx file to open" });
  private name = "stayrate.xlsx";

  constructor(
    private readonly session: Session,
    private readonly banner: Banner,
    private readonly focusGrid: () => void,
  ) {
    this.words = [word("Open .xlsx", () => this.chooser.click()), word("Save .xlsx", () => void this.save()), this.chooser];
    this.chooser.addEventListener("change", () => {
      const file = this.chooser.files?.[0];
      this.chooser.value = "";
      if (file) void this.open(file);
    });
  }

  /** Opens a file in place of the workbook; what stood there can be brought back. A file that cannot be read changes nothing. */
  private async open(file: File): Promise<void> {
    const { session, banner } = this;
    session.settle();
    if (session.readOnly !== null) {
      session.say(session.readOnly);
      return;
    }
    const exchange = await import("../exchange");
    const before = session.book.toJSON();
    try {
      session.say(`Opening ${file.name} …`);
      const { file: opened, notes } = await exchange.openXlsx(new Uint8Array(await file.arrayBuffer()));
      this.show(session.book, opened);
      this.name = file.name;
      session.say(`${file.name} is open.`);
      banner.show([`${file.name} stands in place of the workbook before.`, ...notes].join(" "), [
        word("Bring the one before back", () => {
          this.show(session.book, before);
          banner.hide();
          session.say("The workbook before is back.");
        }),
        word("Go on", () => {
          banner.hide();
          this.focusGrid();
        }),
      ]);
    } catch (error) {
      if (!(error instanceof Error)) throw error;
      session.say(`${file.name} was not opened: ${error.message}`);
    }
  }

  private show(book: Book, file: BookFile): void {
    book.replaceWith(file);
    this.session.reopened();
    this.focusGrid();
  }

  private async save(): Promise<void> {
    const { session } = this;
    session.settle();
    const exchange = await import("../exchange");
    try {
      const bytes = await exchange.saveXlsx(session.book);
      const address = URL.createObjectURL(new Blob([bytes as BlobPart], { type: TYPE }));
      el("a", { href: address, download: this.name }).click();
      // The download has its own copy once it has begun; until then the address must stay.
      setTimeout(() => URL.revokeObjectURL(address), 60_000);
      session.say(`Saved as ${this.name}.`);
    } catch (error) {
      if (!(error instanceof Error)) throw error;
      session.say(`Not saved: ${error.message}`);
    }
  }
}
