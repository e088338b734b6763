import { checkCsv } from "@/app/_edge/check";

/** All lines of a check as CSV. */
export const POST = checkCsv;
