import type { RouteObject } from 'react-router-dom';
import { CataloguePage } from './catalogue.tsx';
import { EditionPage, SharedPage } from './edition.tsx';
import { Frame } from './frame.tsx';
import { GuidePage } from './guide.tsx';
import { HomePage } from './home.tsx';
import { NotFoundPage, PageFailed } from './not-found.tsx';
import { NotebookPage } from './notebook.tsx';
import { paths } from './paths.ts';
import { ShelfPage } from './shelf.tsx';
import { SignInPage } from './sign-in.tsx';
import { TryPage } from './try.tsx';

/** The pages, all within one frame; each loads what it shows and has faces of its own for waiting and failing. */
export const pages: RouteObject[] = [
  {
    element: <Frame />,
    errorElement: <PageFailed />,
    children: [
      { path: paths.home.pattern, element: <HomePage />, errorElement: <PageFailed /> },
      { path: paths.signIn.pattern, element: <SignInPage />, errorElement: <PageFailed /> },
      { path: paths.shelf.pattern, element: <ShelfPage />, errorElement: <PageFailed /> },
      { path: paths.notebook.pattern, element: <NotebookPage />, errorElement: <PageFailed /> },
      { path: paths.edition.pattern, element: <EditionPage />, errorElement: <PageFailed /> },
      { path: paths.shared.pattern, element: <SharedPage />, errorElement: <PageFailed /> },
      { path: paths.catalogue.pattern, element: <CataloguePage />, errorElement: <PageFailed /> },
      { path: paths.guide.pattern, element: <GuidePage />, errorElement: <PageFailed /> },
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
      { path: '*', element: <NotFoundPage /> },
    ],
  },
];
