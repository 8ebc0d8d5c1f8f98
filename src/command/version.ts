/** Version of Holdfast; a test holds it to package.json. Here, alone, so that `--version` loads nothing else. */
export const VERSION = '0.1.0';
