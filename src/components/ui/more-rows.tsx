import { Button } from './button';

interface Props {
  list: {
    hasNextPage: boolean;
    isFetchingNextPage: boolean;
    fetchNextPage: () => Promise<unknown>;
  };
  /** What comes: "Earlier passes". */
  word: string;
}

/** Fetches the next page of a list that stands inside a document. */
export function MoreRows({ list, word }: Props) {
  if (!list.hasNextPage) return null;
  return (
    <div className="pt-12 print:hidden">
      <Button busy={list.isFetchingNextPage} onClick={() => void list.fetchNextPage()}>
        {list.isFetchingNextPage ? 'Fetching' : word}
      </Button>
    </div>
  );
}
