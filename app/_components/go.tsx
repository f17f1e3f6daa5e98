import Link from 'next/link';
import type { ComponentProps } from 'react';

/** A link inside the product; fetched when followed, not before. */
export function Go(props: ComponentProps<typeof Link>) {
  return <Link prefetch={false} {...props} />;
}
