import { Navigate, createBrowserRouter } from 'react-router-dom';
import type { ComponentType } from 'react';
import { paths } from '../lib/paths';
import { Broken } from './broken';
import { Shell } from './shell';

const page =
  <Module,>(load: () => Promise<Module>, pick: (module: Module) => ComponentType) =>
  async () => ({ Component: pick(await load()) });

/** All addresses; each page is a chunk of its own. */
export const createRouter = () =>
  createBrowserRouter([
    {
      path: '/sign-in',
      lazy: page(
        () => import('../pages/sign-in-page'),
        (module) => module.SignInPage,
      ),
      errorElement: <Broken />,
      hydrateFallbackElement: <></>,
    },
    {
      element: <Shell />,
      errorElement: <Broken />,
      hydrateFallbackElement: <></>,
      children: [
        { index: true, element: <Navigate to={paths.fleet()} replace /> },
        {
          path: '/fleet',
          lazy: page(
            () => import('../pages/fleet-page'),
            (module) => module.FleetPage,
          ),
        },
        {
          path: '/equipment/:unitId',
          lazy: page(
            () => import('../pages/unit-page'),
            (module) => module.UnitPage,
          ),
        },
        {
          path: '/alerts',
          lazy: page(
            () => import('../pages/alerts-page'),
            (module) => module.AlertsPage,
          ),
        },
        {
          path: '/watches',
          lazy: page(
            () => import('../pages/watches-page'),
            (module) => module.WatchesPage,
          ),
        },
        {
          path: '/doubts',
          lazy: page(
            () => import('../pages/doubts-page'),
            (module) => module.DoubtsPage,
          ),
        },
        {
          path: '/rework',
          lazy: page(
            () => import('../pages/rework-page'),
            (module) => module.ReworkPage,
          ),
        },
        {
          path: '/set-aside',
          lazy: page(
            () => import('../pages/set-aside-page'),
            (module) => module.SetAsidePage,
          ),
        },
        {
          path: '/what-to-look-at',
          lazy: page(
            () => import('../pages/demo-cases-page'),
            (module) => module.DemoCasesPage,
          ),
        },
        {
          path: '*',
          lazy: page(
            () => import('../pages/nothing-here-page'),
            (module) => module.NothingHerePage,
          ),
        },
      ],
    },
  ]);
