/** All of the program: what is put together into one file. Each part begins only when it is called. */
export const main = async (args: readonly string[]): Promise<void> => (await import('./main.js')).main(args);
export const workAsThread = async (): Promise<void> => (await import('./thread-work.js')).workAsThread();
