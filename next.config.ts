import type { NextConfig } from "next";

const config: NextConfig = {
  reactCompiler: true,
  poweredByHeader: false,
  agentRules: false,
  // A list of serials may come as a file of 1 MiB, and its form with it.
  experimental: { serverActions: { bodySizeLimit: "4mb" } },
  images: { unoptimized: true },
  // The types step checks every file; a build that only serves need not do it again.
  typescript: { ignoreBuildErrors: true },
  rewrites: async () => [
    { source: "/healthz", destination: "/api/healthz" },
    { source: "/readyz", destination: "/api/readyz" },
  ],
  // For everything that leaves here, errors and files of the build too; proxy.ts adds the policy of a page.
  headers: async () => [
    {
      source: "/:path*",
      headers: [
        { key: "Strict-Transport-Security", value: "max-age=63072000; includeSubDomains" },
        { key: "X-Content-Type-Options", value: "nosniff" },
        { key: "Referrer-Policy", value: "same-origin" },
        { key: "X-Frame-Options", value: "DENY" },
        { key: "Cross-Origin-Opener-Policy", value: "same-origin" },
        { key: "Permissions-Policy", value: "camera=(self), geolocation=(), microphone=(), payment=()" },
      ],
    },
  ],
  serverExternalPackages: [
    "pg",
    "pino",
    "sharp",
    "graphile-worker",
    "bwip-js",
    "@react-pdf/renderer",
    "mailparser",
    "nodemailer",
  ],
};

export default config;
