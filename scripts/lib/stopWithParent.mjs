/**
 * Loaded into each program that start.mjs keeps running (`node --import …`). When start.mjs is gone without
 * having been able to stop it (killed, or its machine's terminal lost), the channel between them closes and the
 * program stops itself the graceful way, instead of holding its port for ever.
 */
if (process.channel) {
  process.once('disconnect', () => process.kill(process.pid, 'SIGTERM'));
  process.channel.unref();
}
