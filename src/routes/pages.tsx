import type { RouteObject } from 'react-router-dom';
import { Waiting } from '../components/faces.tsx';
import { Frame } from './frame.tsx';
import { HomePage } from './home.tsx';
import { NotFoundPage, PageFailed } from './not-found.tsx';
import { paths } from './paths.ts';
import { TryPage } from './try.tsx';

/** The pages, all within one frame; those that are not a first view come when they are asked for. Each loads what it shows and has faces of its own for waiting and failing. */
export const pages: RouteObject[] = [
  {
    element: <Frame />,
    errorElement: <PageFailed />,
    hydrateFallbackElement: <Waiting what="Opening the page …" />,
    children: [
      { path: paths.home.pattern, element: <HomePage />, errorElement: <PageFailed /> },
      {
        path: paths.signIn.pattern,
        lazy: async () => ({ Component: (await import('./sign-in.tsx')).SignInPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.shelf.pattern,
        lazy: async () => ({ Component: (await import('./shelf.tsx')).ShelfPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.jobs.pattern,
        lazy: async () => ({ Component: (await import('./jobs.tsx')).JobsPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.notebook.pattern,
        lazy: async () => ({ Component: (await import('./notebook.tsx')).NotebookPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.edition.pattern,
        lazy: async () => ({ Component: (await import('./edition.tsx')).EditionPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.shared.pattern,
        lazy: async () => ({ Component: (await import('./edition.tsx')).SharedPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.catalogue.pattern,
        lazy: async () => ({ Component: (await import('./catalogue.tsx')).CataloguePage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.guide.pattern,
        lazy: async () => ({ Component: (await import('./guide.tsx')).GuidePage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.worked.pattern,
        lazy: async () => ({ Component: (await import('./worked.tsx')).WorkedPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.chapter.pattern,
        lazy: async () => ({ Component: (await import('./chapter.tsx')).ChapterPage }),
        errorElement: <PageFailed />,
      },
      { path: paths.try.pattern, element: <TryPage />, errorElement: <PageFailed /> },
      {
        path: paths.account.pattern,
        lazy: async () => ({ Component: (await import('./account.tsx')).AccountPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.address.pattern,
        lazy: async () => ({ Component: (await import('./address.tsx')).AddressPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.bin.pattern,
        lazy: async () => ({ Component: (await import('./bin.tsx')).BinPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.claimSheet.pattern,
        lazy: async () => ({ Component: (await import('./claim-sheet.tsx')).ClaimSheetPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.collation.pattern,
        lazy: async () => ({ Component: (await import('./collation.tsx')).CollationPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.variants.pattern,
        lazy: async () => ({ Component: (await import('./collation.tsx')).VariantsPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.sending.pattern,
        lazy: async () => ({ Component: (await import('./collation.tsx')).SendingPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.compare.pattern,
        lazy: async () => ({ Component: (await import('./compare.tsx')).ComparePage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.editions.pattern,
        lazy: async () => ({ Component: (await import('./editions.tsx')).EditionsPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.invitation.pattern,
        lazy: async () => ({ Component: (await import('./invitation.tsx')).InvitationPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.notices.pattern,
        lazy: async () => ({ Component: (await import('./notices.tsx')).NoticesPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.signInLink.pattern,
        lazy: async () => ({ Component: (await import('./sign-in-link.tsx')).SignInLinkPage }),
        errorElement: <PageFailed />,
      },
      {
        path: paths.steward.pattern,
        lazy: async () => ({ Component: (await import('./steward.tsx')).StewardPage }),
        errorElement: <PageFailed />,
      },
      { path: '*', element: <NotFoundPage /> },
    ],
  },
];
