/** The part of sax that the manifest check uses; the package carries no types of its own. */
declare module "sax" {
  interface Parser {
    readonly line: number;
    onerror(error: Error): void;
    onopentag(tag: { name: string; attributes: Record<string, string> }): void;
    ontext(text: string): void;
    onclosetag(name: string): void;
    write(text: string): Parser;
    close(): Parser;
  }
  const sax: { parser(strict: boolean): Parser };
  export default sax;
}
