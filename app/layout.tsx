import type { Metadata, Viewport } from 'next';
import { cookies } from 'next/headers';
import type { ReactNode } from 'react';
import './globals.css';
import './_components/shell.css';

export const metadata: Metadata = {
  title: { default: 'Tillwater', template: '%s · Tillwater' },
  description: 'What every parcel needs, and what every canal must carry to meet it.',
};

export const viewport: Viewport = {
  width: 'device-width',
  initialScale: 1,
  themeColor: [
    { media: '(prefers-color-scheme: light)', color: '#f5f7f6' },
    { media: '(prefers-color-scheme: dark)', color: '#11181a' },
  ],
};

/** The document: language and theme are settled on the server, so nothing flashes and no inline script is needed. */
export default async function RootLayout({ children }: { children: ReactNode }) {
  const theme = (await cookies()).get('tillwater_theme')?.value;
  return (
    <html lang="en" data-theme={theme === 'light' || theme === 'dark' ? theme : undefined}>
      <body>{children}</body>
    </html>
  );
}
