import { StrictMode } from 'react';
import { createRoot } from 'react-dom/client';
import { App } from './app/App';
import { tellCaught } from './app/tell-caught';
import './ui/base.css';

const root = document.getElementById('root');
if (root === null) throw new Error('index.html has no #root');
createRoot(root, { onCaughtError: tellCaught }).render(
  <StrictMode>
    <App />
  </StrictMode>,
);
