/** A made-up arc suite (the Oruvai Arc) with gaps, limits, errors and altered samples; the same numbers every time. */
const volcanoes = ['Ketu', 'Marrin', 'Halvo', 'Tessary', 'Ondrik', 'Pell', 'Sarvo', 'Umbrel', 'Noth', 'Kessa', 'Virrin', 'Dolt', 'Asmar', 'Yeln', 'Brakka', 'Cirro', 'Tovel', 'Ivint', 'Luska', 'Morne'];

/** A small linear congruential generator: enough to scatter points in a picture. */
function scatter(seed) {
  let state = seed;
  const uniform = () => (state = (state * 1664525 + 1013904223) % 4294967296) / 4294967296;
  return { uniform, normal: () => uniform() + uniform() + uniform() + uniform() - 2 };
}

export function madeSuite(ww, { samples, groups, seed = 7 }) {
  const { uniform, normal } = scatter(seed);
  const names = [...'SiO2 TiO2 Al2O3 FeOT FeO Fe2O3 MnO MgO CaO Na2O K2O P2O5 LOI'.split(' '), ...'Cs Rb Ba Th U Nb Ta La Ce Pb Pr Sr Nd Zr Hf Sm Eu Ti Gd Tb Dy Y Ho Er Tm Yb Lu Sc V Cr Ni Co'.split(' ')];
  const values = Object.fromEntries(names.map((name) => [name, new Float64Array(samples)]));
  const limits = { Nb: new Float64Array(samples).fill(NaN), Ta: new Float64Array(samples).fill(NaN) };
  const states = Object.fromEntries(names.map((name) => [name, new Uint8Array(samples)]));
  const volcano = [];
  const alteration = [];
  for (let i = 0; i < samples; i++) {
    const g = i % groups;
    const evolved = Math.min(0.8, Math.max(0, uniform() * 0.75 + 0.05 * normal()));
    const back = groups === 1 ? 0.3 : g / (groups - 1);
    const set = (name, value, spread = 0.03) => (values[name][i] = value * (1 + spread * normal()));
    set('SiO2', 49.5 + 24 * evolved, 0.008);
    set('TiO2', 1.05 - 0.75 * evolved);
    set('Al2O3', 17.6 - 3 * evolved);
    set('FeOT', (10.4 - 9 * evolved) * (1 - 0.1 * back));
    set('FeO', (8.2 - 7.2 * evolved) * (1 - 0.1 * back));
    values.Fe2O3[i] = (values.FeOT[i] - values.FeO[i]) / 0.8998;
    set('MnO', 0.18 - 0.12 * evolved);
    set('MgO', 8.2 * Math.exp(-3.1 * evolved) + 0.2, 0.08);
    set('CaO', 11 - 10.2 * evolved);
    set('Na2O', 2.2 + 2.4 * evolved);
    set('K2O', (0.35 + 1.3 * back) * (1 + 2.4 * evolved), 0.08);
    set('P2O5', 0.12 + 0.2 * back);
    set('LOI', 0.9, 0.6);
    const fluid = (1 + 2 * (1 - back)) * (1 + 1.6 * evolved);
    const melt = (1 + 2.5 * back) * (1 + 1.8 * evolved);
    for (const [name, base, factor] of [
      ['Cs', 0.25, fluid], ['Rb', 7, melt], ['Ba', 120, fluid], ['Th', 0.6, melt], ['U', 0.25, melt], ['Nb', 1.1, melt], ['Ta', 0.07, melt], ['La', 4.2, melt], ['Ce', 10.5, melt],
      ['Pb', 2.2, fluid], ['Pr', 1.6, melt ** 0.9], ['Sr', 320, 1 + 0.8 * back - 0.9 * evolved], ['Nd', 8, melt ** 0.8], ['Zr', 55, melt], ['Hf', 1.6, melt ** 0.9], ['Sm', 2.3, melt ** 0.6],
      ['Eu', 0.85, melt ** 0.4 * (1 - 0.5 * evolved)], ['Ti', 5800, 1 - 0.7 * evolved], ['Gd', 2.8, melt ** 0.4], ['Tb', 0.48, melt ** 0.35], ['Dy', 3.1, melt ** 0.3], ['Y', 18, melt ** 0.3],
      ['Ho', 0.66, melt ** 0.3], ['Er', 1.95, melt ** 0.3], ['Tm', 0.29, melt ** 0.3], ['Yb', 1.95, melt ** 0.28], ['Lu', 0.3, melt ** 0.28], ['Sc', 36, 1 - 1.1 * evolved], ['V', 280, 1 - 1.1 * evolved],
      ['Cr', 220, Math.exp(-6 * evolved)], ['Ni', 80, Math.exp(-5 * evolved)], ['Co', 34, Math.exp(-2.2 * evolved)],
    ]) set(name, Math.max(0.001, base * factor), 0.06);
    if (values.Nb[i] < 1.3 && i % 4 === 0) {
      states.Nb[i] = 1;
      limits.Nb[i] = 1.5;
      values.Nb[i] = NaN;
    }
    if (i % 23 === 5) {
      for (const name of ['Pr', 'Tb', 'Ho', 'Tm']) {
        values[name][i] = NaN;
        states[name][i] = 3;
      }
    }
    if (i % 29 === 7) {
      values.K2O[i] = NaN;
      states.K2O[i] = 3;
    }
    volcano.push(g < volcanoes.length ? volcanoes[g] : `Cone ${g + 1}`);
    alteration.push(i % 17 === 3 ? 'chlorite' : '');
  }
  return ww.suiteOf({
    columns: names.map((symbol) => ww.column({
      symbol, values: values[symbol], states: states[symbol],
      ...(limits[symbol] === undefined ? {} : { limits: limits[symbol] }),
      sigma: values[symbol].map((value) => value * 0.02),
    })),
    labels: { sample: volcano.map((name, i) => `${name.slice(0, 2).toUpperCase()}-${i + 1}`), volcano, alteration },
  });
}
