import type { Routes } from '@angular/router';
import { holds, signedIn, signedOut } from './core/guards';

/** Every screen is a chunk of its own. `data.section` is the word in the head that is inked. */
export const routes: Routes = [
  {
    path: 'sign-in',
    title: 'Sign in',
    canActivate: [signedOut],
    loadComponent: () => import('./sign-in/sign-in').then((m) => m.SignIn),
  },
  {
    path: 'reset',
    title: 'Password',
    loadComponent: () => import('./reset/reset-page').then((m) => m.ResetPage),
  },
  {
    path: 'invitation',
    title: 'Invitation',
    loadComponent: () => import('./invitation/invitation-page').then((m) => m.InvitationPage),
  },
  {
    path: 'unreachable',
    title: 'No answer',
    loadComponent: () => import('./shell/unreachable').then((m) => m.Unreachable),
  },
  {
    path: '',
    canActivate: [signedIn],
    children: [
      {
        path: '',
        pathMatch: 'full',
        title: 'Desk',
        data: { section: 'desk' },
        loadComponent: () => import('./desk/desk').then((m) => m.Desk),
      },
      {
        path: 'experiments',
        data: { section: 'experiments' },
        children: [
          {
            path: '',
            pathMatch: 'full',
            title: 'Experiments',
            loadComponent: () => import('./experiments/experiment-list').then((m) => m.ExperimentList),
          },
          {
            path: ':id',
            title: 'Experiment',
            loadComponent: () => import('./experiments/experiment-page').then((m) => m.ExperimentPage),
          },
          {
            path: ':id/setup',
            title: 'Setup',
            loadComponent: () => import('./setup/setup-page').then((m) => m.SetupPage),
          },
        ],
      },
      {
        path: 'runs/:id',
        title: 'Run',
        data: { section: 'experiments' },
        loadComponent: () => import('./runs/run-page').then((m) => m.RunPage),
      },
      {
        path: 'side-by-side',
        title: 'Side by side',
        data: { section: 'experiments' },
        loadComponent: () => import('./side-by-side/side-by-side-page').then((m) => m.SideBySidePage),
      },
      {
        path: 'help',
        title: 'Help',
        data: { section: 'help' },
        loadComponent: () => import('./help/help-page').then((m) => m.HelpPage),
      },
      {
        path: 'admin',
        data: { section: 'admin' },
        canActivate: [holds('admin')],
        loadChildren: () => import('./admin/admin.routes').then((m) => m.adminRoutes),
      },
      {
        path: 'not-yours',
        title: 'Not yours',
        data: { reason: 'role' },
        loadComponent: () => import('./shell/nowhere').then((m) => m.Nowhere),
      },
      {
        path: '**',
        title: 'Not here',
        data: { reason: 'address' },
        loadComponent: () => import('./shell/nowhere').then((m) => m.Nowhere),
      },
    ],
  },
];
