import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { createBrowserRouter, RouterProvider } from 'react-router-dom';
import { NoConnection, RequestFailed } from './api/client.ts';
import { pages } from './routes/pages.tsx';

const client = new QueryClient({
  defaultOptions: {
    queries: {
      staleTime: 10_000,
      // What was refused stays refused; a connection or a server that was away is asked again.
      retry: (count, error) =>
        count < 2 && (error instanceof NoConnection || (error instanceof RequestFailed && error.status >= 500)),
    },
  },
});

const router = createBrowserRouter(pages);

export function App() {
  return (
    <QueryClientProvider client={client}>
      <RouterProvider router={router} />
    </QueryClientProvider>
  );
}
