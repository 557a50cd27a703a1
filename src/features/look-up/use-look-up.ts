import { useDeferredValue, useState } from 'react';
import type { KeyboardEvent } from 'react';
import { keepPreviousData, useQuery, useQueryClient } from '@tanstack/react-query';
import { useNavigate } from 'react-router-dom';
import { parseUnit } from '../../../server/domain/identifiers/parse-unit';
import { paths } from '../../lib/paths';
import type { LookUpHit } from '../../lib/wire';
import { lookUpQuery } from './api/look-up';
import { singleHit } from './single-hit';

const none: LookUpHit[] = [];

/** Where a hit leads: the car's page, or Fleet narrowed to the site. */
export const pathOfHit = (hit: LookUpHit): string =>
  hit.kind === 'site' ? paths.fleet({ site: hit.id }) : paths.equipment(hit.id);

/** What is wrong with a number that is typed out, known without asking: its check digit. */
function wrongDigit(typed: string): string | null {
  const parsed = parseUnit(typed);
  if (parsed.kind !== 'wrong' || parsed.fault !== 'check-digit') return null;
  const meant = parseUnit(typed.replace(/\d\s*$/, ''));
  return meant.kind === 'unit'
    ? `${parsed.detail} Did you mean ${meant.identity.display}?`
    : parsed.detail;
}

/** The look-up field's behaviour: what is typed, its hits, the one in hand, and what Enter does. */
export function useLookUp(onDone: () => void) {
  const [typed, setTyped] = useState('');
  const [open, setOpen] = useState(false);
  const [chosen, setChosen] = useState(-1);
  const client = useQueryClient();
  const navigate = useNavigate();
  const asked = useDeferredValue(typed.trim());
  const answer = useQuery({ ...lookUpQuery(asked), placeholderData: keepPreviousData });
  const hits = asked === '' ? none : (answer.data?.hits ?? none);

  const goTo = (hit: LookUpHit) => {
    setTyped('');
    setOpen(false);
    setChosen(-1);
    onDone();
    void navigate(pathOfHit(hit));
  };
  const enter = async () => {
    const picked = hits[chosen];
    if (picked) return goTo(picked);
    const text = typed.trim();
    if (text === '') return;
    const found = await client.fetchQuery(lookUpQuery(text)).catch(() => undefined);
    const meant = singleHit(text, found?.hits ?? []);
    if (meant) goTo(meant);
    else setOpen(true);
  };
  const onKeyDown = (event: KeyboardEvent) => {
    if (event.key === 'Enter') void enter();
    else if (event.key === 'Escape') setOpen(false);
    else if (event.key === 'ArrowDown') setChosen(Math.min(hits.length - 1, chosen + 1));
    else if (event.key === 'ArrowUp') setChosen(Math.max(-1, chosen - 1));
    else return;
    event.preventDefault();
  };
  return {
    typed,
    isOpen: open && typed.trim() !== '',
    hits,
    chosen,
    problem: wrongDigit(typed.trim()) ?? (asked === '' ? null : (answer.data?.problem ?? null)),
    isAsking: answer.isFetching,
    error: answer.error,
    onType: (text: string) => {
      setTyped(text);
      setOpen(true);
      setChosen(-1);
    },
    close: () => setOpen(false),
    goTo,
    onKeyDown,
  };
}
