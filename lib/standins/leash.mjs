// Loaded first in every process that Mendbay starts: when its parent was killed, the channel
// between them closes, and the process ends in order instead of staying behind.
// What such a process starts in turn inherits this file, but is its own parent's business.
if (process.ppid === Number(process.env.MENDBAY_PARENT)) {
  process.on("disconnect", () => process.kill(process.pid, "SIGTERM"));
  // Listening alone must not keep a finished process alive.
  process.channel?.unref();
}
