import './api/zod.ts';
import './components/tokens.css';
import { StrictMode } from 'react';
import { createRoot } from 'react-dom/client';
import { App } from './App.tsx';
import { chooseTheme, chosenTheme } from './components/theme.ts';

chooseTheme(chosenTheme());
const root = document.getElementById('root');
if (root)
  createRoot(root).render(
    <StrictMode>
      <App />
    </StrictMode>,
  );
