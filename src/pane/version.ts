/** The add-in's version, as check sheets print it; a test holds it to package.json. */
export const VERSION = "1.0.0";
