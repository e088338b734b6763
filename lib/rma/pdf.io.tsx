/* eslint-disable jsx-a11y/alt-text -- pictures of a sheet of paper, their text stands beside them */
import { join } from "node:path";
import {
  Circle,
  Document,
  Font,
  Image,
  Page,
  Path,
  Rect,
  renderToBuffer,
  StyleSheet,
  Svg,
  Text,
  View,
} from "@react-pdf/renderer";
import bwip from "bwip-js/node";
import { showDay, showInstant } from "@/lib/base/show";
import { REMEDY_WORDS, type Remedy } from "@/lib/coverage/schema";
import { cautionsFor, packingSteps, type PackStep } from "./rules";
import type { RmaView } from "./schema";

const file = (name: string) => join(process.cwd(), "fonts", `atkinson-hyperlegible-${name}-normal.woff`);
let registered = false;

/** The same faces as on screen: they tell 0 from O and 1 from l. Latin Extended stands behind Latin. */
function registerFonts(): void {
  if (registered) return;
  registered = true;
  for (const [family, part] of [
    ["Next", "next-latin"],
    ["NextExt", "next-latin-ext"],
    ["Mono", "mono-latin"],
    ["MonoExt", "mono-latin-ext"],
  ] as const) {
    Font.register({
      family,
      fonts: [
        { src: file(`${part}-400`), fontWeight: 400 },
        { src: file(`${part}-700`), fontWeight: 700 },
      ],
    });
  }
  Font.registerHyphenationCallback((word) => [word]);
}

const UI = ["Next", "NextExt"] as unknown as string;
const MONO = ["Mono", "MonoExt"] as unknown as string;

const s = StyleSheet.create({
  page: {
    fontFamily: UI,
    fontSize: 9.5,
    color: "#000",
    backgroundColor: "#fff",
    paddingHorizontal: 34,
    paddingTop: 28,
    paddingBottom: 24,
    lineHeight: 1.35,
  },
  row: { flexDirection: "row" },
  bold: { fontWeight: 700 },
  mono: { fontFamily: MONO },
  small: { fontSize: 8.5 },
  th: { fontSize: 8, color: "#333" },
  cell: { borderBottomWidth: 0.5, borderBottomColor: "#999", paddingVertical: 3.5 },
});

const PATHS: Record<PackStep["drawing"], string> = {
  cap: "M20 10h44v7H20z M42 17v6 M16 23h52v36H16z M22 29h40v24H22z M16 23h9l-9 9z",
  clamshell: "M14 34h56v24H14z M14 34l8-20h40l8 20 M28 40h28v12H28z",
  bag: "M20 8h44v50H20z M20 14h44 M30 24h24v24H30z",
  foam: "M8 6h68v56H8z M24 18h36v32H24z M42 6v12 M42 50v12 M8 34h16 M60 34h16",
  data: "M20 14h44v44H20z M26 60L58 8",
  paper: "M10 14h64v46H10z M30 24h30v20H30z M34 29h20 M34 34h14 M34 39h18",
  truck: "M8 16h34v30H8z M42 26h14l12 12v8H42z M4 46h8 M26 46h24 M62 46h10",
  lift: "M30 30h24v10H30z M20 28v18 M64 28v18 M20 32l10 4 M64 32l-10 4",
};

/** Code 128 with ten modules of quiet zone on both sides. `width` in points; returns a PNG and its ratio. */
async function barcode(text: string): Promise<{ src: Buffer; ratio: number }> {
  const src = await bwip.toBuffer({
    bcid: "code128",
    text,
    scale: 4,
    height: 14,
    paddingleft: 10,
    paddingright: 10,
    paddingtop: 0,
    paddingbottom: 0,
    backgroundcolor: "FFFFFF",
  });
  return { src, ratio: src.readUInt32BE(16) / src.readUInt32BE(20) };
}

function Box() {
  return (
    <Svg width={9} height={9}>
      <Rect x={0.5} y={0.5} width={8} height={8} stroke="#000" strokeWidth={1} fill="none" />
    </Svg>
  );
}

/**
 * The sheet that goes with the part from the customer's box to its end: tag above, cut or folded
 * at the middle, packing steps for exactly these parts below. A4, black on white.
 */
export async function renderTraveler(rma: RmaView, seller: string, printedAt: Date): Promise<Buffer> {
  registerFonts();
  const first = rma.lines[0]!;
  const sendBy = rma.expiresOn ? showDay(rma.expiresOn) : "the day agreed";
  const [unitCode, rmaCode] = [await barcode(first.serial), await barcode(rma.number)];
  const codes = await Promise.all(rma.lines.slice(1).map((l) => barcode(l.serial)));
  const cautions = cautionsFor(rma.lines).slice(0, 4);
  const steps = packingSteps(rma.lines, sendBy).slice(0, 6);
  const serialSize = first.serial.length <= 12 ? 36 : first.serial.length <= 16 ? 29 : 22;
  const [W, N] = [527, 30];
  return renderToBuffer(
    <Document title={`Traveler ${rma.number}`} author={seller} language="en">
      <Page size="A4" style={s.page}>
        <View style={[s.row, { justifyContent: "space-between" }]}>
          <View>
            <Text style={[s.bold, { fontSize: 12.5 }]}>{seller}</Text>
            <Text>{[rma.site.name, ...rma.site.addressLines].join(", ")}</Text>
          </View>
          <View style={{ textAlign: "right" }}>
            <Text>Traveler, sheet 1 of 1</Text>
            <Text>printed {showInstant(printedAt, rma.site.zone)}</Text>
          </View>
        </View>

        <View
          style={{
            position: "relative",
            marginTop: 8,
            paddingLeft: 56,
            paddingRight: 14,
            paddingTop: 12,
            paddingBottom: 10,
            minHeight: 292,
          }}
        >
          <Svg style={{ position: "absolute", left: 0, top: 0 }} width={W} height={292}>
            <Path d={`M${N} 0.5H${W - 0.5}V291.5H0.5V${N}Z`} stroke="#000" strokeWidth={1} fill="none" />
            <Circle cx={28} cy={150} r={10} stroke="#000" strokeWidth={1.2} fill="none" />
          </Svg>
          <View style={[s.row, { justifyContent: "space-between", alignItems: "flex-start" }]}>
            <Text style={[s.mono, s.bold, { fontSize: serialSize, lineHeight: 1 }]}>{first.serial}</Text>
            <Text style={[s.mono, s.bold, { fontSize: 16, lineHeight: 1 }]}>{rma.number}</Text>
          </View>
          <View style={[s.row, { justifyContent: "space-between", marginTop: 8 }]}>
            <View>
              <Image
                src={{ data: unitCode.src, format: "png" }}
                style={{ height: 46, width: Math.min(250, 46 * unitCode.ratio) }}
              />
              <Text style={s.th}>
                unit <Text style={s.mono}>{first.serial}</Text>
              </Text>
            </View>
            <View>
              <Image
                src={{ data: rmaCode.src, format: "png" }}
                style={{ height: 46, width: Math.min(190, 46 * rmaCode.ratio) }}
              />
              <Text style={s.th}>
                RMA <Text style={s.mono}>{rma.number}</Text>
              </Text>
            </View>
          </View>
          <View style={[s.row, { marginTop: 8 }]}>
            <View style={{ width: 250, paddingRight: 12 }}>
              <Text>
                <Text style={s.th}>From </Text>
                {rma.accountName}
                {rma.personName !== rma.accountName ? `, ${rma.personName}` : ""}
              </Text>
              <Text>
                <Text style={s.th}>Fault </Text>“{rma.faultWords.replace(/\s+/g, " ").slice(0, 110)}”
              </Text>
            </View>
            <View>
              <Text>
                <Text style={s.th}>Due </Text>
                <Text style={s.bold}>{sendBy}</Text>
              </Text>
              <Text>
                <Text style={s.th}>Remedy </Text>
                {REMEDY_WORDS[rma.remedy as Remedy]}
              </Text>
            </View>
          </View>
          <View
            style={[
              s.row,
              { marginTop: 8, borderBottomWidth: 1, borderBottomColor: "#000", paddingBottom: 2 },
            ]}
          >
            <Text style={[s.th, { width: 150 }]}>Comes back</Text>
            <Text style={[s.th, { width: 140 }]}>Serial</Text>
            <Text style={[s.th, { width: 55 }]}>Received</Text>
            <Text style={[s.th, { width: 45 }]}>Photo</Text>
            <Text style={s.th}>Bench</Text>
          </View>
          {rma.lines.slice(0, 5).map((l, i) => (
            <View key={l.id} style={[s.row, s.cell, { alignItems: "center" }]}>
              <Text style={{ width: 150 }}>
                {(l.slot ? `${l.slot}, ${l.modelName}` : l.modelName).slice(0, 34)}
              </Text>
              <View style={{ width: 140 }}>
                <Text style={s.mono}>{l.serial}</Text>
                {i > 0 && codes[i - 1] ? (
                  <Image
                    src={{ data: codes[i - 1]!.src, format: "png" }}
                    style={{ height: 14, width: Math.min(130, 14 * codes[i - 1]!.ratio) }}
                  />
                ) : null}
              </View>
              <View style={{ width: 55 }}>
                <Box />
              </View>
              <View style={{ width: 45 }}>
                <Box />
              </View>
              <Box />
            </View>
          ))}
          {rma.lines.length > 5 ? (
            <Text style={s.th}>and {rma.lines.length - 5} more, on the RMA page</Text>
          ) : null}
        </View>

        <View
          style={[s.row, { borderTopWidth: 1.5, borderBottomWidth: 1.5, borderColor: "#000", marginTop: 9 }]}
        >
          {cautions.map((c, i) => (
            <View
              key={c.title}
              style={{
                flex: 1,
                paddingVertical: 5,
                paddingHorizontal: 7,
                borderLeftWidth: i === 0 ? 0 : 0.75,
                borderLeftColor: "#000",
              }}
            >
              <Text style={s.bold}>{c.title}</Text>
              <Text style={s.small}>{c.detail}</Text>
              {c.drawing === "data" ? (
                <View style={{ marginTop: 2 }}>
                  <View style={[s.row, { alignItems: "center" }]}>
                    <Box />
                    <Text style={[s.small, { marginLeft: 4 }]}>cleared by me</Text>
                  </View>
                  <View style={[s.row, { alignItems: "center" }]}>
                    <Box />
                    <Text style={[s.small, { marginLeft: 4 }]}>please sanitize it</Text>
                  </View>
                </View>
              ) : null}
            </View>
          ))}
        </View>

        <View
          style={{
            marginTop: 12,
            marginHorizontal: -34,
            borderTopWidth: 1,
            borderTopColor: "#000",
            borderTopStyle: "dashed",
          }}
        />
        <Text style={{ fontSize: 8, marginTop: 2 }}>
          fold or cut here: the tag above goes on the unit, the half below stays on top
        </Text>

        <View style={[s.row, { justifyContent: "space-between", alignItems: "flex-end", marginTop: 10 }]}>
          <Text style={[s.bold, { fontSize: 15 }]}>How to pack it</Text>
          <Text style={s.small}>
            Before you start: power off, unplug every lead, wait, clip on a wrist strap.
          </Text>
        </View>
        <View style={[s.row, { flexWrap: "wrap", marginTop: 4 }]}>
          {steps.map((step, i) => (
            <View key={step.title} style={[s.row, { width: "33.3%", paddingRight: 12, marginBottom: 12 }]}>
              <View style={[s.row, { borderTopWidth: 0.75, borderTopColor: "#000", paddingTop: 5, flex: 1 }]}>
                <Svg width={62} height={52} viewBox="0 0 84 70">
                  <Path d={PATHS[step.drawing]} stroke="#000" strokeWidth={2} fill="none" />
                </Svg>
                <View style={{ flex: 1, paddingLeft: 6 }}>
                  <Text style={s.bold}>
                    {i + 1}. {step.title}
                  </Text>
                  <Text>{step.text}</Text>
                </View>
              </View>
            </View>
          ))}
        </View>
        <Text style={s.small}>
          Do not send rails, caddies, bezels, cables or loose batteries.
          {rma.fees.map((f) => ` ${f.words} ${(f.cents / 100).toFixed(2)} EUR.`).join("")}
        </Text>

        <View
          style={[
            s.row,
            {
              justifyContent: "space-between",
              borderTopWidth: 1.5,
              borderTopColor: "#000",
              marginTop: 6,
              paddingTop: 7,
            },
          ]}
        >
          <View>
            <Text style={s.small}>Send to</Text>
            <Text style={[s.bold, { fontSize: 15, lineHeight: 1.25 }]}>
              {seller}, <Text style={s.mono}>{rma.number}</Text>
            </Text>
            {rma.site.addressLines.map((l) => (
              <Text key={l} style={[s.bold, { fontSize: 15, lineHeight: 1.25 }]}>
                {l}
              </Text>
            ))}
          </View>
          <View>
            <Image
              src={{ data: rmaCode.src, format: "png" }}
              style={{ height: 46, width: Math.min(190, 46 * rmaCode.ratio) }}
            />
            <Text style={[s.th, s.mono]}>{rma.number}</Text>
          </View>
        </View>
        <View style={{ marginTop: 12 }}>
          <Text style={s.small}>
            Your rights by law stand beside these terms. Questions: give the RMA number.
          </Text>
          <Text style={s.small}>
            <Text style={s.mono}>O 0 I l 1 B 8</Text> are printed so that you can tell them apart.
          </Text>
        </View>
      </Page>
    </Document>,
  );
}
