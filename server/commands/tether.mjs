/** Preloaded into the processes that `start.mjs` starts: they end, in good order, when the one that started them is gone. */
if (process.channel) {
  process.channel.unref();
  process.once('disconnect', () => process.kill(process.pid, 'SIGTERM'));
}
