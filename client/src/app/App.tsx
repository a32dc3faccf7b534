import { QueryClientProvider } from '@tanstack/react-query';
import { useState } from 'react';
import { RouterProvider } from 'react-router-dom';
import { createQueries } from './query-client';
import { createPages } from './router';
import { tellCaught } from './tell-caught';

export function App() {
  const [queries] = useState(createQueries);
  const [pages] = useState(() => createPages(queries));
  return (
    <QueryClientProvider client={queries}>
      <RouterProvider router={pages} onError={tellCaught} />
    </QueryClientProvider>
  );
}
