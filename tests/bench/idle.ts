/** Does nothing: what the machine alone does to an event loop. */
setInterval(() => undefined, 1000);
process.stdout.write('idle\n');
