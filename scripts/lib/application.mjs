/**
 * The served application as a child of a script. When the script is killed the channel between
 * them closes, and the application ends too instead of keeping its port.
 */
const end = () => process.kill(process.pid, 'SIGTERM');
process.once('disconnect', end);
// Listened to, the channel keeps the process alive; nothing is left to wait for by then.
process.once('sveltekit:shutdown', () => {
  process.off('disconnect', end);
  if (process.connected) process.disconnect();
});
await import('../../build/index.js');
