/** The names that office-addin-mock takes from the manifest package, which itself runs on Node only. */
export enum OfficeApp {
  Excel = "excel",
  OneNote = "onenote",
  Outlook = "outlook",
  PowerPoint = "powerpoint",
  Project = "project",
  Word = "word",
}
