import { describe, expect, it } from 'vitest';
import { unplacedRooms, whyNot } from '../../scripts/lint/rooms.mjs';

describe('the direction of imports', () => {
  it.each([
    ['server/routes/watches.ts', 'server/services/update-watch.js'],
    ['server/index.ts', 'server/app.js'],
    ['server/contract/register.ts', 'server/domain/identifiers/parse-unit.js'],
    ['server/lib/context.ts', 'server/config/env.js'],
    ['src/features/fleet/api/get-fleet.ts', 'server/contract/equipment'],
    ['src/pages/fleet-page.tsx', 'src/features/fleet/components/fleet-table'],
    ['src/features/fleet/api/get-fleet.ts', 'src/features/fleet/components/row'],
    ['tests/api/reads.test.ts', 'server/app.js'],
  ])('lets %s use %s', (from, to) => {
    expect(whyNot(from, to)).toBeNull();
  });

  it.each([
    ['server/services/update-watch.ts', 'server/routes/watches.js', /only rooms below it/],
    ['server/domain/passes.ts', 'server/models/index.js', /only rooms below it/],
    ['server/jobs/send.ts', 'server/middleware/validate.js', /only rooms below it/],
    ['server/contract/register.ts', 'server/domain/movements/index.js', /only rooms below it/],
    ['server/app.ts', 'src/lib/paths.js', /never imports the client/],
    ['server/app.ts', 'tests/support/context.js', /never imports tests/],
    ['src/lib/api.ts', 'server/queries/equipment', /src\/ may read only/],
    ['src/lib/api.ts', 'server/domain/movements/index', /src\/ may read only/],
    ['src/features/fleet/api/a.ts', 'src/features/watches/api/b', /"fleet" never imports/],
    ['src/components/ui/button.tsx', 'src/features/fleet/api/a', /only rooms below it/],
    ['server/cellar/a.ts', 'server/lib/clock.js', /no place among the rooms/],
  ])('keeps %s from %s', (from, to, why) => {
    expect(whyNot(from, to)).toMatch(why);
  });

  it('knows a place for every room there is', () => {
    expect(unplacedRooms(process.cwd())).toEqual([]);
  });
});
