/** Runs `act` at once when asked, then at most once an interval; a call in between is not lost. */
export function createThrottle(intervalMilliseconds: number, act: () => void) {
  let timer: ReturnType<typeof setTimeout> | undefined;
  let isOwed = false;
  const rest = () => {
    timer = setTimeout(() => {
      timer = undefined;
      if (isOwed) run();
    }, intervalMilliseconds);
  };
  const run = () => {
    isOwed = false;
    act();
    rest();
  };
  return {
    ask(): void {
      if (timer === undefined) run();
      else isOwed = true;
    },
    stop(): void {
      clearTimeout(timer);
    },
  };
}
