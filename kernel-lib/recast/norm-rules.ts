/** Normative minerals, in the usual order: salic, then femic. `Cm` (chromite) only where Cr2O3 is used. */
export const normMinerals = [
  'Q',
  'C',
  'Or',
  'Ab',
  'An',
  'Lc',
  'Ne',
  'Kp',
  'Ac',
  'Ns',
  'Ks',
  'Di',
  'Wo',
  'Hy',
  'Ol',
  'Cs',
  'Mt',
  'Cm',
  'Hm',
  'Il',
  'Tn',
  'Pf',
  'Ru',
  'Ap',
  'Cc',
] as const;
export type NormMineral = (typeof normMinerals)[number];

/** End members of the mafic silicates, by weight. */
export const normParts = ['DiWo', 'DiEn', 'DiFs', 'HyEn', 'HyFs', 'OlFo', 'OlFa'] as const;
export type NormPart = (typeof normParts)[number];

const at = Object.fromEntries(normMinerals.map((mineral, j) => [mineral, j])) as Record<NormMineral, number>;

/** CaO taken by one P2O5 in apatite. */
const limePerPhosphorus = 10 / 3;

/** The norm of one analysis at a time: fill `oxides`, call `run`, read the rest. The arrays are used again for the next analysis. */
export interface NormRow {
  /** wt % in the order SiO2, Al2O3, FeO, Fe2O3, MgO, CaO, Na2O, K2O, TiO2, MnO, P2O5, then CO2 and Cr2O3, NiO, SrO, BaO where they are used. */
  readonly oxides: Float64Array;
  readonly weights: Float64Array;
  readonly moles: Float64Array;
  readonly parts: Float64Array;
  /** False when there is less silica than the poorest minerals take. */
  readonly run: () => boolean;
  readonly magnesiumShare: () => number;
  /** wt % of P2O5, CO2 and Cr2O3 for which there was no lime or iron: in no mineral. */
  readonly remainder: () => number;
}

/** Relative size below which a remainder is rounding, not matter. */
const rounding = 1e-12;

/** Makes the norm of one row with the given molar masses (g/mol). */
export function normRow(mass: (oxide: string) => number, { carbonate, traces }: { carbonate: boolean; traces: boolean }): NormRow {
  const [mSi, mAl, mFe2, mFe3, mMg, mCa, mNa, mK, mTi, mMn, mP] = [
    'SiO2',
    'Al2O3',
    'FeO',
    'Fe2O3',
    'MgO',
    'CaO',
    'Na2O',
    'K2O',
    'TiO2',
    'MnO',
    'P2O5',
  ].map(mass);
  const [mC, mCr, mNi, mSr, mBa] = ['CO2', 'Cr2O3', 'NiO', 'SrO', 'BaO'].map(mass);
  // The optional oxides follow in the order in which they are used; the caller's list has CO2 before the traces.
  const oxides = new Float64Array(16);
  const weights = new Float64Array(normMinerals.length);
  const moles = new Float64Array(normMinerals.length);
  const parts = new Float64Array(normParts.length);
  let share = NaN;
  let remainder = 0;

  function run(): boolean {
    const w = oxides;
    const cr = traces ? w[carbonate ? 12 : 11] : 0;
    const ni = traces ? w[carbonate ? 13 : 12] : 0;
    const sr = traces ? w[carbonate ? 14 : 13] : 0;
    const ba = traces ? w[carbonate ? 15 : 14] : 0;
    const co2 = carbonate ? w[11] / mC : 0;
    const si = w[0] / mSi;
    let al = w[1] / mAl;
    let fe3 = w[3] / mFe3;
    const mg = w[4] / mMg;
    let ca = w[5] / mCa + sr / mSr + ba / mBa;
    let na = w[6] / mNa;
    const k = w[7] / mK;
    let ti = w[8] / mTi;
    let fe2 = w[2] / mFe2 + w[9] / mMn + ni / mNi;
    // Mass of one mole of "FeO" with its MnO and NiO, and of "CaO" with its SrO and BaO.
    const fe2Mass = fe2 > 0 ? (w[2] + w[9] + ni) / fe2 : mFe2;
    const caMass = ca > 0 ? (w[5] + sr + ba) / ca : mCa;
    const total = si + al + fe3 + mg + ca + na + k + ti + fe2;
    const eps = rounding * total;

    // Phosphorus and carbon first, as far as lime goes.
    const phosphorus = w[10] / mP;
    const ap = Math.min(phosphorus, ca / limePerPhosphorus);
    ca -= ap * limePerPhosphorus;
    const cc = Math.min(co2, ca);
    ca -= cc;
    const cm = Math.min(cr / mCr, fe2);
    fe2 -= cm;
    remainder = (phosphorus - ap) * mP + (co2 - cc) * mC + (cr - cm * mCr);
    const il = Math.min(ti, fe2);
    fe2 -= il;
    ti -= il;
    // Alkalis take alumina, potassium first; alkalis left over take ferric iron or stand alone.
    let or = Math.min(k, al);
    al -= or;
    const ks = k - or;
    let ab = Math.min(na, al);
    al -= ab;
    na -= ab;
    const ac = Math.min(na, fe3);
    fe3 -= ac;
    const ns = na - ac;
    const an = Math.min(al, ca);
    al -= an;
    ca -= an;
    const corundum = al;
    let tn = Math.min(ti, ca);
    ca -= tn;
    const ru = ti - tn;
    const mt = Math.min(fe3, fe2);
    fe3 -= mt;
    fe2 -= mt;
    const hm = fe3;
    // Mafic silicates share one Mg/(Mg + Fe).
    const mafic = mg + fe2;
    share = mafic > eps ? mg / mafic : NaN;
    const xMg = mafic > 0 ? mg / mafic : 0;
    let di = Math.min(ca, mafic);
    let wo = ca - di;
    let hy = mafic - di;
    let ol = 0;
    let cs = 0;
    let pf = 0;
    let ne = 0;
    let lc = 0;
    let kp = 0;
    let lack = ks + ns + 4 * ac + 6 * or + 6 * ab + 2 * an + tn + 2 * di + wo + hy - si;
    let q = 0;
    if (lack <= eps) q = Math.max(0, -lack);
    else {
      // Each change frees silica; the next begins when the one before is spent.
      let part = Math.min(lack, hy / 2);
      hy = part === hy / 2 ? 0 : hy - 2 * part;
      ol += part;
      lack -= part;
      part = Math.min(lack, tn);
      tn -= part;
      pf = part;
      lack -= part;
      part = Math.min(lack / 4, ab);
      ab -= part;
      ne = part;
      lack -= 4 * part;
      part = Math.min(lack / 2, or);
      or -= part;
      lc = part;
      lack -= 2 * part;
      part = Math.min(lack, wo / 2);
      wo = part === wo / 2 ? 0 : wo - 2 * part;
      cs += part;
      lack -= part;
      part = Math.min(lack, di);
      di -= part;
      cs += part / 2;
      ol += part / 2;
      lack -= part;
      part = Math.min(lack / 2, lc);
      lc -= part;
      kp = part;
      lack -= 2 * part;
      if (lack > 1e-9 * total) return false;
    }

    moles[at.Q] = q;
    moles[at.C] = corundum;
    moles[at.Or] = or;
    moles[at.Ab] = ab;
    moles[at.An] = an;
    moles[at.Lc] = lc;
    moles[at.Ne] = ne;
    moles[at.Kp] = kp;
    moles[at.Ac] = ac;
    moles[at.Ns] = ns;
    moles[at.Ks] = ks;
    moles[at.Di] = di;
    moles[at.Wo] = wo;
    moles[at.Hy] = hy;
    moles[at.Ol] = ol;
    moles[at.Cs] = cs;
    moles[at.Mt] = mt;
    moles[at.Cm] = cm;
    moles[at.Hm] = hm;
    moles[at.Il] = il;
    moles[at.Tn] = tn;
    moles[at.Pf] = pf;
    moles[at.Ru] = ru;
    moles[at.Ap] = ap;
    moles[at.Cc] = cc;

    weights[at.Q] = q * mSi;
    weights[at.C] = corundum * mAl;
    weights[at.Or] = or * (mK + mAl + 6 * mSi);
    weights[at.Ab] = ab * (mNa + mAl + 6 * mSi);
    weights[at.An] = an * (caMass + mAl + 2 * mSi);
    weights[at.Lc] = lc * (mK + mAl + 4 * mSi);
    weights[at.Ne] = ne * (mNa + mAl + 2 * mSi);
    weights[at.Kp] = kp * (mK + mAl + 2 * mSi);
    weights[at.Ac] = ac * (mNa + mFe3 + 4 * mSi);
    weights[at.Ns] = ns * (mNa + mSi);
    weights[at.Ks] = ks * (mK + mSi);
    parts[0] = di * (caMass + mSi);
    parts[1] = di * xMg * (mMg + mSi);
    parts[2] = di * (1 - xMg) * (fe2Mass + mSi);
    parts[3] = hy * xMg * (mMg + mSi);
    parts[4] = hy * (1 - xMg) * (fe2Mass + mSi);
    parts[5] = ol * xMg * (2 * mMg + mSi);
    parts[6] = ol * (1 - xMg) * (2 * fe2Mass + mSi);
    weights[at.Di] = parts[0] + parts[1] + parts[2];
    weights[at.Wo] = wo * (caMass + mSi);
    weights[at.Hy] = parts[3] + parts[4];
    weights[at.Ol] = parts[5] + parts[6];
    weights[at.Cs] = cs * (2 * caMass + mSi);
    weights[at.Mt] = mt * (fe2Mass + mFe3);
    weights[at.Cm] = cm * (fe2Mass + mCr);
    weights[at.Hm] = hm * mFe3;
    weights[at.Il] = il * (fe2Mass + mTi);
    weights[at.Tn] = tn * (caMass + mTi + mSi);
    weights[at.Pf] = pf * (caMass + mTi);
    weights[at.Ru] = ru * mTi;
    weights[at.Ap] = ap * (mP + limePerPhosphorus * caMass);
    weights[at.Cc] = cc * (caMass + mC);
    return true;
  }

  return {
    oxides,
    weights,
    moles,
    parts,
    run,
    magnesiumShare: () => share,
    remainder: () => remainder,
  };
}
