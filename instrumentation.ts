/** Called once when the server starts, before its first request. */
export async function register(): Promise<void> {
  if (process.env.NEXT_RUNTIME !== "nodejs") return;
  const { noteSocketAddresses } = await import("./lib/caller-address");
  noteSocketAddresses();
  const { startServerWork } = await import("./lib/jobs/start");
  startServerWork();
}
