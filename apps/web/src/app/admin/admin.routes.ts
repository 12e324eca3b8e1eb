import type { Routes } from '@angular/router';

export const adminRoutes: Routes = [
  {
    path: '',
    loadComponent: () => import('./admin-frame').then((m) => m.AdminFrame),
    children: [
      { path: '', pathMatch: 'full', redirectTo: 'queue' },
      { path: 'queue', title: 'Queue', loadComponent: () => import('./queue/queue-page').then((m) => m.QueuePage) },
      {
        path: 'workers',
        title: 'Workers',
        loadComponent: () => import('./workers/workers-page').then((m) => m.WorkersPage),
      },
      {
        path: 'people',
        title: 'People',
        loadComponent: () => import('./people/people-page').then((m) => m.PeoplePage),
      },
      {
        path: 'outbox',
        title: 'Outbox',
        loadComponent: () => import('./outbox/outbox-page').then((m) => m.OutboxPage),
      },
      {
        path: 'audit',
        title: 'Audit trail',
        loadComponent: () => import('./audit/audit-page').then((m) => m.AuditPage),
      },
    ],
  },
];
