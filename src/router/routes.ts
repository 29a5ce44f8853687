import type { RouteRecordRaw } from 'vue-router';

export const routes: RouteRecordRaw[] = [
  {
    path: '/sign-in',
    name: 'sign-in',
    component: () => import('../pages/sign-in/SignInPage.vue'),
    meta: { open: true, title: 'Sign in' },
  },
  {
    path: '/set-password',
    name: 'set-password',
    component: () => import('../pages/sign-in/SetPasswordPage.vue'),
    meta: { open: true, title: 'Set a password' },
  },
  {
    path: '/',
    component: () => import('../layouts/MainLayout.vue'),
    children: [
      {
        path: '',
        name: 'board',
        component: () => import('../pages/board/BoardPage.vue'),
        meta: { title: 'Board' },
      },
      {
        path: 'register',
        name: 'register',
        component: () => import('../pages/register/RegisterPage.vue'),
        meta: { title: 'Register' },
      },
      {
        path: 'register/new',
        name: 'register-new',
        component: () => import('../pages/register/NewSoftSensorPage.vue'),
        meta: { title: 'Register a soft sensor' },
      },
      {
        path: 'register/:id(\\d+)/:tab(estimate|recalibration|model|replays|samples|events|sheet|changes)?',
        name: 'sheet',
        component: () => import('../pages/register/SheetPage.vue'),
        meta: { title: 'Data sheet' },
      },
      {
        path: 'calibrations/:id(\\d+)',
        name: 'calibration',
        component: () => import('../pages/calibrations/CalibrationPage.vue'),
        meta: { title: 'Recalibration' },
      },
      {
        path: 'sites/:siteId(\\d+)/events',
        name: 'events',
        component: () => import('../pages/events/EventsPage.vue'),
        meta: { title: 'Events' },
      },
      {
        path: 'replays/:id(\\d+)',
        name: 'replay',
        component: () => import('../pages/register/ReplayPage.vue'),
        meta: { title: 'Replay' },
      },
      {
        path: 'samples',
        name: 'samples',
        component: () => import('../pages/samples/SamplesPage.vue'),
        meta: { title: 'Samples' },
      },
      {
        path: 'samples/:id(\\d+)',
        name: 'sample',
        component: () => import('../pages/samples/SamplePage.vue'),
        meta: { title: 'Sample' },
      },
      {
        path: 'samples/imports/:id(\\d+)',
        name: 'sample-import',
        component: () => import('../pages/samples/SampleImportPage.vue'),
        meta: { title: 'Add samples' },
      },
      {
        path: 'samples/asked',
        name: 'asked',
        component: () => import('../pages/samples/AskedPage.vue'),
        meta: { title: 'Samples asked for' },
      },
      {
        path: 'samples/points',
        name: 'sample-points',
        component: () => import('../pages/samples/SamplePointsPage.vue'),
        meta: { title: 'Sample points and methods' },
      },
      {
        path: 'duties',
        name: 'duties',
        component: () => import('../pages/duties/DutiesPage.vue'),
        meta: { title: 'Duties' },
      },
      {
        path: 'history',
        name: 'history',
        component: () => import('../pages/history/HistoryPage.vue'),
        meta: { title: 'Tag history' },
      },
      {
        path: 'history/:id(\\d+)',
        name: 'history-import',
        component: () => import('../pages/history/HistoryImportPage.vue'),
        meta: { title: 'Add history' },
      },
      {
        path: 'administration/people',
        name: 'people',
        component: () => import('../pages/administration/PeoplePage.vue'),
        meta: { title: 'People' },
      },
      {
        path: 'administration/sites',
        name: 'sites',
        component: () => import('../pages/administration/SitesPage.vue'),
        meta: { title: 'Sites' },
      },
      {
        path: 'administration/sites/:id(\\d+)/:tab(units|tags)?',
        name: 'site',
        component: () => import('../pages/administration/SitePage.vue'),
        meta: { title: 'Site' },
      },
      {
        path: 'administration/mail',
        name: 'mail',
        component: () => import('../pages/administration/MailPage.vue'),
        meta: { title: 'Sent mail' },
      },
      {
        path: 'audit',
        name: 'audit',
        component: () => import('../pages/administration/AuditPage.vue'),
        meta: { title: 'Audit trail' },
      },
      {
        path: ':rest(.*)*',
        name: 'nothing',
        component: () => import('../pages/sign-in/NothingHerePage.vue'),
        meta: { title: 'Nothing here' },
      },
    ],
  },
];
