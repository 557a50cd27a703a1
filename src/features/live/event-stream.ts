import { api } from '../../lib/paths';
import type { ChangedEvent } from '../../lib/wire';

/** What the stream tells its owner. */
export interface StreamListener {
  /** Open; `isAnew` when what was missed is not known and everything must be asked again. */
  onOpen: (isAnew: boolean) => void;
  onChanged: (unitIds: string[]) => void;
  onAlerts: () => void;
  onDown: () => void;
}

/** The server's events. A stream that the browser gave up is opened again by `revive`. */
export function openEventStream(listener: StreamListener) {
  let source = connect();

  function connect(): EventSource {
    const opened = new EventSource(api.events);
    opened.addEventListener('ready', () => listener.onOpen(false));
    opened.addEventListener('reset', () => listener.onOpen(true));
    opened.addEventListener('changed', (event) =>
      listener.onChanged((JSON.parse(event.data as string) as ChangedEvent).unitIds),
    );
    opened.addEventListener('alerts', () => listener.onAlerts());
    opened.addEventListener('error', () => listener.onDown());
    return opened;
  }

  return {
    isOpen: (): boolean => source.readyState === EventSource.OPEN,
    revive: (): void => {
      if (source.readyState === EventSource.CLOSED) source = connect();
    },
    close: (): void => source.close(),
  };
}
