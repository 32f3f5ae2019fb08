/**
 * The served application as a child of a script. When the script is killed the channel between
 * them closes, and the application ends too instead of keeping its port.
 */
process.once('disconnect', () => process.kill(process.pid, 'SIGTERM'));
await import('../../build/index.js');
