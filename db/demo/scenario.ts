/** The invented seller, its people, customers, models and terms. No name here is anybody's. */
import type { addStock } from "@/lib/ledger/commands";
import type { publishTerms } from "@/lib/coverage/commands";

export const STAFF = [
  { email: "noor@ostwick.example", name: "Noor Haddad", post: "warranty desk", roles: ["agent"] },
  { email: "ruben@ostwick.example", name: "Ruben Castellan", post: "warranty desk", roles: ["agent"] },
  { email: "piotr@ostwick.example", name: "Piotr Lund", post: "receiving, door 2", roles: ["warehouse"] },
  { email: "mei@ostwick.example", name: "Mei Okafor", post: "bench 3", roles: ["warehouse"] },
  { email: "anneke@ostwick.example", name: "Anneke Sow", post: "service manager", roles: ["manager"] },
  { email: "tobias@ostwick.example", name: "Tobias Renn", post: "administration", roles: ["admin"] },
] as const;

export type Customer = {
  code: string;
  name: string;
  kind: "business" | "consumer" | "unknown";
  country: string;
  person: string;
  email: string;
  weight: number;
  rooms: string[];
};
export const CUSTOMERS: Customer[] = [
  {
    code: "BRAMBLE",
    name: "Bramblegate University",
    kind: "business",
    country: "GB",
    person: "Ifeoma Carrow",
    email: "ifeoma@bramblegate.example",
    weight: 34,
    rooms: ["room 2.14", "library", "lab annex", "machine hall"],
  },
  {
    code: "PINNOCK",
    name: "Pinnock Analytics",
    kind: "business",
    country: "IE",
    person: "Sam Pell",
    email: "sam@pinnock.example",
    weight: 30,
    rooms: ["rack A3", "rack A4", "rack B1"],
  },
  {
    code: "LOWMERE",
    name: "Lowmere Hosting",
    kind: "business",
    country: "DE",
    person: "Dana Voss",
    email: "dana@lowmere.example",
    weight: 34,
    rooms: ["hall 1", "hall 2", "hall 3"],
  },
  {
    code: "TALLOW",
    name: "Wren Tallow",
    kind: "consumer",
    country: "GB",
    person: "Wren Tallow",
    email: "wren@tallow.example",
    weight: 1,
    rooms: [""],
  },
  {
    code: "PENHALE",
    name: "Jory Penhale",
    kind: "consumer",
    country: "IE",
    person: "Jory Penhale",
    email: "jory@penhale.example",
    weight: 1,
    rooms: [""],
  },
];

type Model = Parameters<typeof addStock>[1]["model"];
export const MODELS = {
  "OW-4420": {
    code: "OW-4420",
    name: "OW-4420 four-socket rack server",
    kind: "system",
    family: "system",
    maker: "Ostwick Server Works",
    facts: { chassis: "OW-4420" },
    weightKg: 38,
    dataBearing: true,
    battery: "coin",
  },
  "OW-2210": {
    code: "OW-2210",
    name: "OW-2210 two-socket rack server",
    kind: "system",
    family: "system",
    maker: "Ostwick Server Works",
    facts: { chassis: "OW-2210" },
    weightKg: 21,
    dataBearing: true,
    battery: "coin",
  },
  "OW-1108": {
    code: "OW-1108",
    name: "OW-1108 edge box",
    kind: "system",
    family: "system",
    maker: "Ostwick Server Works",
    facts: { chassis: "OW-1108" },
    weightKg: 6,
    dataBearing: true,
    battery: "coin",
  },
  "EB-4420": {
    code: "EB-4420",
    name: "Board for OW-4420",
    kind: "part",
    family: "board",
    maker: "Ostwick Server Works",
    facts: { socket: "CS4", chassis: "OW-4420" },
    weightKg: 3,
    battery: "coin",
  },
  "EB-2210": {
    code: "EB-2210",
    name: "Board for OW-2210",
    kind: "part",
    family: "board",
    maker: "Ostwick Server Works",
    facts: { socket: "CS4", chassis: "OW-2210" },
    weightKg: 2,
    battery: "coin",
  },
  "EB-1108": {
    code: "EB-1108",
    name: "Board for OW-1108",
    kind: "part",
    family: "board",
    maker: "Ostwick Server Works",
    facts: { socket: "CS1", chassis: "OW-1108" },
    weightKg: 1,
    battery: "coin",
  },
  "CS-4216": {
    code: "CS-4216",
    name: "Corvane 16-core processor",
    kind: "part",
    family: "processor",
    maker: "Corvane Silicon",
    facts: { socket: "CS4", generation: 2, cores: 16, clock: 2.4, watts: 150 },
  },
  "CS-4224": {
    code: "CS-4224",
    name: "Corvane 24-core processor",
    kind: "part",
    family: "processor",
    maker: "Corvane Silicon",
    facts: { socket: "CS4", generation: 2, cores: 24, clock: 2.5, watts: 185 },
  },
  "OM-32R": {
    code: "OM-32R",
    name: "Ostrel 32 GB module",
    kind: "part",
    family: "memory",
    maker: "Ostrel Memory",
    facts: { type: "gen 4", form: "full height", registered: "yes", gb: 32, speed: 2933 },
  },
  "OM-64R": {
    code: "OM-64R",
    name: "Ostrel 64 GB module",
    kind: "part",
    family: "memory",
    maker: "Ostrel Memory",
    facts: { type: "gen 4", form: "full height", registered: "yes", gb: 64, speed: 2933 },
  },
  "VS-19": {
    code: "VS-19",
    name: "Vantry 1.9 TB drive",
    kind: "part",
    family: "drive",
    maker: "Vantry Storage",
    facts: { interface: "two-lane", form: "2.5 inch", media: "flash", gb: 1920 },
    dataBearing: true,
  },
  "VS-38": {
    code: "VS-38",
    name: "Vantry 3.8 TB drive",
    kind: "part",
    family: "drive",
    maker: "Vantry Storage",
    facts: { interface: "two-lane", form: "2.5 inch", media: "flash", gb: 3840 },
    dataBearing: true,
  },
  "KP-800": {
    code: "KP-800",
    name: "Keldar 800 W supply",
    kind: "part",
    family: "power_supply",
    maker: "Keldar Power",
    facts: { form: "slim", connector: "blade 12", watts: 800 },
    weightKg: 1,
  },
  "KP-1600": {
    code: "KP-1600",
    name: "Keldar 1600 W supply",
    kind: "part",
    family: "power_supply",
    maker: "Keldar Power",
    facts: { form: "slim", connector: "blade 12", watts: 1600 },
    weightKg: 1.2,
  },
  "ON-210": {
    code: "ON-210",
    name: "Two-port network adapter",
    kind: "part",
    family: "network",
    maker: "Corvane Silicon",
    facts: { interface: "half height", gbps: 10 },
  },
} satisfies Record<string, Model>;
export type ModelCode = keyof typeof MODELS;

export const SUPPLIER_OF: Partial<Record<ModelCode, string>> = {
  "CS-4216": "Corvane Silicon",
  "CS-4224": "Corvane Silicon",
  "OM-32R": "Ostrel Memory",
  "OM-64R": "Ostrel Memory",
  "VS-19": "Vantry Storage",
  "VS-38": "Vantry Storage",
  "KP-800": "Keldar Power",
  "KP-1600": "Keldar Power",
  "ON-210": "Corvane Silicon",
};

type Terms = Parameters<typeof publishTerms>[1];
type Clause = Terms["clauses"][number];

const EXCLUSIONS: Clause[] = [
  {
    number: "7.1",
    kind: "exclusion",
    title: "Physical damage",
    exclusion: "physical_damage",
    evidence: ["photo of the damage"],
    words: "Damage from outside after delivery.",
  },
  {
    number: "7.2",
    kind: "exclusion",
    title: "Bent socket contacts",
    exclusion: "bent_contacts",
    evidence: ["photo of the socket"],
    words: "Contacts bent after delivery.",
  },
  {
    number: "7.3",
    kind: "exclusion",
    title: "Liquid",
    exclusion: "liquid",
    evidence: ["photo of the traces"],
    words: "Liquid inside.",
  },
  {
    number: "7.4",
    kind: "exclusion",
    title: "Unauthorized change",
    exclusion: "unauthorized_change",
    evidence: ["version read-out in a log"],
    words: "Firmware or parts changed in a way we did not allow.",
  },
  {
    number: "7.5",
    kind: "exclusion",
    title: "Altered label",
    exclusion: "altered_label",
    evidence: ["photo of the label"],
    words: "A serial label that was changed or moved from another unit.",
  },
];
const GIVEN_ON: Clause[] = [
  {
    number: "6.1",
    kind: "transfer",
    title: "Given on to another company",
    transferRule: "with_notice",
    period: "P30D",
    words: "Cover goes along when we are told in writing within thirty days.",
  },
];
const FEES: Clause[] = [
  {
    number: "8.1",
    kind: "fee",
    title: "No fault found",
    feeKind: "no_fault_found",
    feeCents: 4500,
    words: "If our bench finds no fault, the test costs",
  },
  {
    number: "8.2",
    kind: "fee",
    title: "Old part not returned",
    feeKind: "not_returned",
    feeCents: 25000,
    words: "If the old part is not on its way back in time, we bill",
  },
];

function standard(systemMonths: string, memory: string): Clause[] {
  return [
    {
      number: "2.1",
      kind: "doa",
      title: "Dead on arrival",
      period: "P30D",
      startBasis: "delivered",
      deliveryGraceDays: 5,
      remedies: ["advance_replacement", "refund"],
      dueBackDays: 14,
      freight: "seller_both",
      responseHours: 4,
      words: "A fault reported in the first days.",
    },
    {
      number: "3.1",
      kind: "cover",
      title: "Board and chassis",
      families: ["system", "board", "chassis"],
      period: systemMonths,
      startBasis: "shipped",
      remedies: ["advance_replacement", "replacement_on_receipt", "repair"],
      dueBackDays: 14,
      holdCents: 90000,
      freight: "customer_in",
      responseHours: 8,
    },
    {
      number: "3.2",
      kind: "cover",
      title: "Memory",
      families: ["memory"],
      period: memory,
      startBasis: "shipped",
      remedies: ["advance_replacement", "replacement_on_receipt"],
      dueBackDays: 14,
    },
    {
      number: "3.3",
      kind: "cover",
      title: "Drives",
      families: ["drive"],
      period: "P36M",
      startBasis: "shipped",
      enduranceHours: 30000,
      enduranceTb: 1800,
      remedies: ["advance_replacement", "replacement_on_receipt"],
      dueBackDays: 14,
      holdCents: 25000,
      freight: "customer_in",
      responseHours: 8,
    },
    {
      number: "3.4",
      kind: "cover",
      title: "Power supplies, fans",
      families: ["power_supply", "fan"],
      period: "P24M",
      startBasis: "shipped",
      remedies: ["replacement_on_receipt"],
    },
    {
      number: "3.5",
      kind: "cover",
      title: "Processors, adapters",
      families: ["processor", "network", "controller", "riser"],
      period: systemMonths,
      startBasis: "shipped",
      remedies: ["replacement_on_receipt", "repair"],
    },
    {
      number: "5.1",
      kind: "replaced_part",
      title: "Parts we fit",
      period: "P90D",
      startBasis: "installed",
      words: "The rest of the first cover, or ninety days, whichever is later.",
    },
    ...GIVEN_ON,
    ...EXCLUSIONS,
    ...FEES,
  ];
}

/** Effective days are in years before the demo's day, so that the scenario does not age. */
export const TERMS: (Omit<Terms, "effectiveOn"> & { yearsBefore: number })[] = [
  {
    code: "OW-STD",
    name: "Standard terms",
    yearsBefore: 4,
    note: "First issue.",
    clauses: standard("P36M", "P60M"),
  },
  {
    code: "OW-STD",
    name: "Standard terms",
    yearsBefore: 1,
    note: "Boards are covered for three years as before, memory for five.",
    clauses: standard("P36M", "P60M"),
  },
  {
    code: "OW-REF",
    name: "Refurbished terms",
    yearsBefore: 4,
    note: "For refurbished units.",
    clauses: [
      {
        number: "2.1",
        kind: "doa",
        title: "Dead on arrival",
        period: "P14D",
        startBasis: "delivered",
        deliveryGraceDays: 5,
        remedies: ["replacement_on_receipt", "refund"],
      },
      {
        number: "3.1",
        kind: "cover",
        title: "Whole unit",
        families: ["system", "board", "chassis", "processor", "memory", "network"],
        period: "P12M",
        startBasis: "delivered",
        deliveryGraceDays: 5,
        remedies: ["replacement_on_receipt", "repair"],
      },
      {
        number: "3.3",
        kind: "cover",
        title: "Drives",
        families: ["drive"],
        period: "P6M",
        startBasis: "delivered",
        deliveryGraceDays: 5,
        enduranceHours: 45000,
        remedies: ["replacement_on_receipt"],
      },
      {
        number: "3.4",
        kind: "cover",
        title: "Power supplies",
        families: ["power_supply"],
        period: "P6M",
        startBasis: "delivered",
        deliveryGraceDays: 5,
        remedies: ["replacement_on_receipt"],
      },
      {
        number: "5.1",
        kind: "replaced_part",
        title: "Parts we fit",
        period: "P90D",
        startBasis: "installed",
      },
      ...GIVEN_ON,
      ...EXCLUSIONS,
      ...FEES,
    ],
  },
];

/** What customers write, by family: the fault class and their words. */
export const FAULTS: Record<string, [faultClass: string, words: string, finding: string][]> = {
  drive: [
    [
      "failed_drive",
      "Drive drops out under load",
      "reallocated blocks above the limit, long self-test stops at 40 %",
    ],
    ["failed_drive", "Drive is gone after every restart", "the drive is not seen on two of three starts"],
    ["errors_logged", "Read errors on one drive, twice a day", "unreadable blocks, rising while we watched"],
  ],
  memory: [
    [
      "errors_logged",
      "Memory errors, move with the module",
      "errors in the second pass, in two known-good slots",
    ],
    ["not_detected", "Half the memory is gone", "the module is seen with half its size"],
  ],
  power_supply: [
    ["no_power", "One supply shows a red lamp", "trips at half load within two minutes"],
    ["no_power", "Supply clicks and goes out", "the rail reads 10.2 V, limit 11.4"],
  ],
  board: [
    ["not_detected", "Socket 3 not seen since the move", "socket not seen with a known-good processor"],
    ["restarts", "Restarts by itself, about daily", "restarts at hour 31 of the soak"],
    ["network_port", "Network port 2 is dead", "port 2 has no link on two cables"],
  ],
  processor: [["restarts", "Machine check, then a restart", "errors under load in a known-good board"]],
  network: [["network_port", "Port drops every few minutes", "link lost nine times in an hour"]],
  system: [
    ["no_power", "Dead out of the box, no lamps at all", "no standby rail; the board is dead"],
    ["noise_or_heat", "Fans at full speed from the start", "the fan sensor reads a constant"],
  ],
};
