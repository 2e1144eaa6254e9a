/** Put in by the bundler from package.json. */
declare const POLEWISE_VERSION: string;

/** Version of the program. */
export const VERSION: string = POLEWISE_VERSION;
