import type { ComponentType } from 'react';
import type { RouteObject } from 'react-router-dom';

/** A page whose code is fetched when it is first turned to. */
export const page = (path: string, fetchPage: () => Promise<ComponentType>): RouteObject =>
  (path === '' ? { index: true, lazy: { Component: fetchPage } } : { path, lazy: { Component: fetchPage } });
