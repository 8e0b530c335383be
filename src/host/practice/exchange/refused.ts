/** A file that cannot be opened or saved; the message is a sentence for the user. The open workbook is untouched. */
export class ExchangeRefused extends Error {
  override readonly name = "ExchangeRefused";
}
