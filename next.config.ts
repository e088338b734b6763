import type { NextConfig } from "next";

const config: NextConfig = {
  reactCompiler: true,
  poweredByHeader: false,
  agentRules: false,
  images: { unoptimized: true },
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
