import { createTransport } from "nodemailer";
import { expect, test } from "vitest";
import { takePort } from "@/lib/standins/ports";

test("a database that is away: the sender is told to come again, and never 250", async () => {
  Object.assign(process.env, {
    DATABASE_URL: `postgres://nobody@127.0.0.1:${await takePort()}/none`,
    MENDBAY_SECRET: "a secret that only tests know, 32 and more",
    MENDBAY_LOG: "silent",
  });
  const { startReceiver } = await import("@/lib/mail/receiver.io");
  const receiver = await startReceiver({ host: "127.0.0.1", port: 0 });
  const post = createTransport({ host: "127.0.0.1", port: receiver.port, ignoreTLS: true });
  try {
    const sent = post.sendMail({
      from: "ines@pinnock.example",
      to: "desk@ostwick.example",
      subject: "x",
      text: "y",
    });
    await expect(sent).rejects.toMatchObject({ responseCode: 451 });
  } finally {
    post.close();
    await receiver.stop();
  }
});
