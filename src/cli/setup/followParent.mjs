// Preloaded into the server and the worker (`node --import`): they stop by themselves when the start that they belong to is
// gone, however it went, so that nothing is left behind that holds the port.
process.on('disconnect', () => process.kill(process.pid, 'SIGTERM'));
// The channel alone must not keep a process alive that has nothing more to do.
process.channel?.unref();
