/** Debian's Chromium, by itself: nothing is fetched or reported behind a test's back. */
export const CHROMIUM = {
  executablePath: "/usr/bin/chromium",
  args: [
    "--no-sandbox",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
    "--disable-quic",
    "--no-first-run",
    "--disable-gpu",
  ],
};
