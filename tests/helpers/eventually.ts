/** Waits until `check` is true, looking again each time the event loop comes round; fails after `withinMs`. */
export async function eventually(check: () => boolean | Promise<boolean>, what: string, withinMs = 10_000): Promise<void> {
  const untilMs = performance.now() + withinMs;
  while (!(await check())) {
    if (performance.now() > untilMs) throw new Error(`Not within ${withinMs} ms: ${what}`);
    await new Promise((resolve) => setTimeout(resolve, 2));
  }
}
