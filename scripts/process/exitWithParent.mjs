// Preloaded into the programs that a script starts (node --import). The channel to the script breaks when the script
// ends, by kill -9 too; then the program is asked to stop as by SIGTERM, so that none is left holding its port.
const graceMs = 10_000;

process.once('disconnect', () => {
  process.kill(process.pid, 'SIGTERM');
  setTimeout(() => process.exit(1), graceMs).unref();
});
process.channel?.unref();
