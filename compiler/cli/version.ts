/** The version of the command and the library; a test holds it equal to that of package.json. */
export const VERSION = "0.1.0";
