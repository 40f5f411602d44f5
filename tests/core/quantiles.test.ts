import { describe, expect, it } from 'vitest';
import { chiSquareTails, fTails, noncentralTLower, normalTails, studentTTails } from '../../shared/sampling/distributions.ts';
import { chiSquareQuantile, criticalT, criticalZ, normalQuantile, normalUpperQuantile, studentTUpperQuantile } from '../../shared/sampling/quantiles.ts';
import { digamma, lnBeta, lnGamma, trigamma, trigammaInverse } from '../../shared/sampling/specialFunctions.ts';

// All tables computed with R 4.2.2: qnorm, pnorm, qt, pt, qchisq, pchisq, pf, digamma, trigamma, lgamma, pt(ncp).
const TOLERANCE = 1e-10;

function expectRelative(actual: number, expected: number, tolerance = TOLERANCE): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

const QNORM = [
  [1e-12, -7.034483825301132], [1e-06, -4.753424308822899], [0.001, -3.090232306167813],
  [0.025, -1.959963984540054], [0.2, -0.8416212335729142], [0.5, 0],
  [0.8, 0.8416212335729144], [0.9, 1.281551565544601], [0.95, 1.644853626951472],
  [0.975, 1.959963984540054], [0.99, 2.326347874040841], [0.995, 2.5758293035489],
  [0.999999, 4.753424308817089],
] as const;

const PNORM = [
  [-38, 0], [-10, 7.619853024160527e-24], [-5, 2.866515718791939e-7],
  [-1.96, 0.02499789514822043], [-0.3, 0.3820885778110473], [0, 0.5],
  [0.5, 0.691462461274013], [1.5, 0.9331927987311419], [3, 0.9986501019683699],
  [6, 0.9999999990134123],
] as const;

/** Upper tail, degrees of freedom, t. */
const QT_UPPER = [
  [0.05, 1, 6.313751514675044], [0.05, 2, 2.919985580353726], [0.05, 3, 2.353363434801826],
  [0.05, 4, 2.13184678632665], [0.05, 9, 1.833112932656237], [0.05, 26.21834, 1.705093595584758],
  [0.05, 100, 1.660234326085324], [0.05, 10000, 1.645006018069243], [0.05, 5e+06, 1.644853931705359],
  [0.025, 1, 12.70620473617471], [0.025, 2, 4.302652729749464], [0.025, 3, 3.182446305283709],
  [0.025, 4, 2.776445105197794], [0.025, 9, 2.262157162798205], [0.025, 26.21834, 2.054696631977143],
  [0.025, 100, 1.983971518523552], [0.025, 10000, 1.960201239890626], [0.025, 5e+06, 1.959964458994413],
  [0.01, 1, 31.82051595377396], [0.01, 2, 6.964556734283273], [0.01, 3, 4.540702858568133],
  [0.01, 4, 3.746947387979196], [0.01, 9, 2.821437925025808], [0.01, 26.21834, 2.477285181340719],
  [0.01, 100, 2.364217366238482], [0.01, 10000, 2.326720838669475], [0.01, 5e+06, 2.326348619855918],
  [0.005, 1, 63.65674116287158], [0.005, 2, 9.924843200918293], [0.005, 3, 5.840909309733356],
  [0.005, 4, 4.604094871349994], [0.005, 9, 3.249835541592126], [0.005, 26.21834, 2.776904986500591],
  [0.005, 100, 2.625890521438018], [0.005, 10000, 2.576321046668528], [0.005, 5e+06, 2.575830286858773],
  [0.0001, 1, 3183.098757118151], [0.0001, 2, 70.70007107496427], [0.0001, 3, 22.20374227320417],
  [0.0001, 4, 13.03367172089646], [0.0001, 9, 6.010132129081441], [0.0001, 26.21834, 4.318306866990425],
  [0.0001, 100, 3.861599790950059], [0.0001, 10000, 3.72039586911764], [0.0001, 5e+06, 3.719019243309734],
  [1e-08, 1, 31830988.61837906], [1e-08, 2, 7071.067705799458], [1e-08, 3, 479.5250695797387],
  [1e-08, 4, 131.5947369406235], [1e-08, 9, 18.28396745591062], [1e-08, 26.21834, 7.922395373014662],
  [1e-08, 100, 6.101573472029796], [1e-08, 10000, 5.616563428916868], [1e-08, 5e+06, 5.612010362162558],
  [0.3, 1, 0.726542528005361], [0.3, 2, 0.6172133998483676], [0.3, 3, 0.5843897274398187],
  [0.3, 4, 0.5686490630497055], [0.3, 9, 0.5434802414542969], [0.3, 26.21834, 0.530837028215159],
  [0.3, 100, 0.5260762706003459], [0.3, 10000, 0.5244172283454667], [0.3, 5e+06, 0.5244005461384675],
  [0.025, 0.5, 164.5576734804945], [0.025, 1.3, 7.500529325562032], [0.025, 2.7, 3.392148383173751],
] as const;

/** Value, degrees of freedom, lower tail. */
const PT = [
  [-40, 1, 0.007956089912025812], [-40, 2.5, 7.097817145246693e-05], [-40, 10, 1.140428871542874e-12],
  [-40, 200, 1.124369826760113e-97], [-3, 1, 0.1024163823495667], [-3, 2.5, 0.03628804777451592],
  [-3, 10, 0.006671827511284794], [-3, 200, 0.001521523556952951], [-0.2, 1, 0.4371670418109989],
  [-0.2, 2.5, 0.4283048420145127], [-0.2, 10, 0.4227445956901728], [-0.2, 200, 0.4208418958792167],
  [0.7, 1, 0.6944001122142147], [0.7, 2.5, 0.728297528405226], [0.7, 10, 0.7500562149135578],
  [0.7, 200, 0.7576296335032591], [2.5, 1, 0.8788810584091566], [2.5, 2.5, 0.9477150184609223],
  [2.5, 10, 0.9842765778816955], [2.5, 200, 0.9933884136791495], [12, 1, 0.9735353239404101],
  [12, 2.5, 0.9985818924849608], [12, 10, 0.9999998539295587], [12, 200, 1],
] as const;

/** Value, degrees of freedom, lower and upper tail. */
const PCHISQ = [
  [0.01, 1, 0.07965567455405796, 0.920344325445942], [0.01, 4, 1.245841135427508e-05, 0.9999875415886457],
  [0.01, 9, 8.408755369388911e-13, 0.9999999999991591], [0.01, 40, 3.901282611875942e-65, 0.9999999999999999],
  [1, 1, 0.682689492137086, 0.3173105078629141], [1, 4, 0.09020401043104988, 0.9097959895689501],
  [1, 9, 0.0005624973021675014, 0.9994375026978325], [1, 40, 2.435465429925315e-25, 1],
  [3.5, 1, 0.9386311708605981, 0.06136882913940195], [3.5, 4, 0.522121655511276, 0.4778783444887241],
  [3.5, 9, 0.05885558995927784, 0.9411444100407221], [3.5, 40, 5.652610769089505e-15, 0.9999999999999943],
  [10, 1, 0.9984345977419975, 0.001565402258002552], [10, 4, 0.9595723180054871, 0.04042768199451281],
  [10, 9, 0.6495147876766386, 0.3504852123233614], [10, 40, 3.452135820914461e-7, 0.999999654786418],
  [60, 1, 0.9999999999999906, 9.48573757107385e-15], [60, 4, 0.9999999999970991, 2.900863120340455e-12],
  [60, 9, 0.999999998659322, 1.340678048395961e-9], [60, 40, 0.9781265315586092, 0.02187346844139086],
] as const;

const QCHISQ = [
  [1e-06, 1, 1.570796326795716e-12], [1e-06, 4, 0.002829761322958686], [1e-06, 9, 0.2283848400734492],
  [1e-06, 29, 5.789703919628619], [1e-06, 300, 197.5969269855494], [0.025, 1, 0.0009820691171752562],
  [0.025, 4, 0.4844185570879297], [0.025, 9, 2.700389499980358], [0.025, 29, 16.04707169536489],
  [0.025, 300, 253.9123226024898], [0.2, 1, 0.06418475466730161], [0.2, 4, 1.648776618065969],
  [0.2, 9, 5.380053211773291], [0.2, 29, 22.47505197751122], [0.2, 300, 279.2143077092956],
  [0.5, 1, 0.4549364231195728], [0.5, 4, 3.356693980033322], [0.5, 9, 8.342832692252953],
  [0.5, 29, 28.33612686658444], [0.5, 300, 299.3335973492176], [0.975, 1, 5.023886187314885],
  [0.975, 4, 11.1432867818778], [0.975, 9, 19.02276779864163], [0.975, 29, 45.72228580417453],
  [0.975, 300, 349.8744688299152], [0.999999, 1, 23.92812697687947], [0.999999, 4, 33.37684158165888],
  [0.999999, 9, 44.81093787062026], [0.999999, 29, 80.43597042040736], [0.999999, 300, 431.1413577224258],
] as const;

/** F, degrees of freedom above and below, upper tail. */
const PF_UPPER = [
  [0.2, 4, 20, 0.9353965414511061], [0.2, 2, 11, 0.821642860749828],
  [0.2, 1, 100, 0.6556880071957626], [0.2, 3.5, 7.2, 0.9146232139792637],
  [1.18046237440255, 4, 20, 0.3494474934021928], [1.18046237440255, 2, 11, 0.3432091988615308],
  [1.18046237440255, 1, 100, 0.2798739206746089], [1.18046237440255, 3.5, 7.2, 0.3891653032109602],
  [4, 4, 20, 0.01524854899618377], [4, 2, 11, 0.04948971617536484],
  [4, 1, 100, 0.04821217873113367], [4, 3.5, 7.2, 0.05441760411457741],
  [59.145989, 4, 20, 8.462103301626357e-11], [59.145989, 2, 11, 1.300217719341482e-06],
  [59.145989, 1, 100, 1.044904793663692e-11], [59.145989, 3.5, 7.2, 1.628272147927902e-05],
] as const;

/** x, digamma, trigamma, log gamma. */
const GAMMA_FAMILY = [
  [0.1, -10.42375494041108, 101.4332991507927, 2.252712651734206],
  [0.5, -1.963510026021423, 4.934802200544679, 0.5723649429247001],
  [1, -0.5772156649015323, 1.644934066848226, 0],
  [4, 1.256117668431801, 0.2838229557371152, 1.791759469228055],
  [10, 2.251752589066721, 0.1051663356816857, 12.80182748008147],
  [100, 4.600161852738088, 0.01005016666333357, 359.1342053695754],
] as const;

/** Value, degrees of freedom, noncentrality, lower tail; R promises about 1e-12 absolute here. */
const NONCENTRAL_T = [
  [2, 10, 1.5, 0.6591540724420263], [-1, 5, 0.5, 0.08244409105697081],
  [1.66, 100, 2.5, 0.2009005967530697], [0.5, 3, -1, 0.9242738812886131],
  [3, 20, 0, 0.9964620506043944],
] as const;

describe('normal distribution', () => {
  it('gives the quantiles of R', () => {
    for (const [p, expected] of QNORM) {
      if (expected === 0) expect(normalQuantile(p)).toBe(0);
      // Forming 1 − p by the caller loses digits near p = 1, in R as here.
      else expectRelative(normalQuantile(p), expected);
    }
  });

  it('keeps its digits in a tail far below the rounding unit', () => {
    // R 4.2.2: qnorm(1e-30, lower.tail = FALSE), qnorm(1e-100, lower.tail = FALSE)
    expectRelative(normalUpperQuantile(1e-30), 11.46402468844362);
    expectRelative(normalUpperQuantile(1e-100), 21.27345356096532);
  });

  it('gives the tails of R', () => {
    for (const [value, expected] of PNORM) if (expected > 0) expectRelative(normalTails(value).lower, expected);
    expectRelative(normalTails(6).upper, 9.86587645037698e-10);
  });

  it('gives the two-sided factors for the four confidences', () => {
    // R 4.2.2 qnorm((1 + c) / 2), printed to six decimals
    const printed = [[0.9, 1.644854], [0.95, 1.959964], [0.98, 2.326348], [0.99, 2.575829]] as const;
    for (const [confidence, z] of printed) expect(criticalZ(confidence)).toBeCloseTo(z, 6);
  });
});

describe("Student's t distribution", () => {
  it('gives the quantiles of R from half a degree of freedom to five million', () => {
    for (const [tail, df, expected] of QT_UPPER) expectRelative(studentTUpperQuantile(tail, df), expected);
  });

  it('agrees with a 40-digit calculation where the expansion takes over', () => {
    // mpmath 1.4.1, root of the incomplete beta at 40 digits
    expectRelative(criticalT(0.95, 10000), 1.9602012398906263, 1e-13);
    expectRelative(criticalT(0.99, 10000), 2.5763210466685287, 1e-13);
    expectRelative(criticalT(0.95, 5000000), 1.9599644589944132, 1e-13);
  });

  it('is odd around the middle and runs into the normal', () => {
    expect(studentTUpperQuantile(0.9, 7)).toBe(-studentTUpperQuantile(1 - 0.9, 7));
    expect(studentTUpperQuantile(0.5, 7)).toBe(0);
    expectRelative(criticalT(0.95, Infinity), criticalZ(0.95), 1e-15);
  });

  it('gives the tails of R', () => {
    for (const [value, df, expected] of PT) expectRelative(studentTTails(value, df).lower, expected);
  });

  it('returns the tail it was asked for, for any degrees of freedom', () => {
    // Thousands of steps of the continued fraction cost the last digits above a million degrees of freedom.
    for (const [df, tolerance] of [[0.7, 1e-11], [1.5, 1e-11], [3, 1e-11], [4.4, 1e-11], [17, 1e-11], [333.3, 1e-11], [9.9e4, 1e-10], [1.01e5, 1e-10], [1e7, 1e-9]] as const)
      for (const tail of [0.4, 0.1, 0.025, 1e-3, 1e-7]) expectRelative(studentTTails(studentTUpperQuantile(tail, df), df).upper, tail, tolerance);
  });

  it('gives the noncentral tails of R', () => {
    for (const [value, df, noncentrality, expected] of NONCENTRAL_T) expectRelative(noncentralTLower(value, df, noncentrality), expected, 1e-10);
  });
});

describe('chi-square and F', () => {
  it('give both tails of R', () => {
    for (const [value, df, lower, upper] of PCHISQ) {
      expectRelative(chiSquareTails(value, df).lower, lower);
      expectRelative(chiSquareTails(value, df).upper, upper);
    }
    for (const [value, above, below, upper] of PF_UPPER) expectRelative(fTails(value, above, below).upper, upper);
  });

  it('give the chi-square quantiles of R', () => {
    for (const [p, df, expected] of QCHISQ) expectRelative(chiSquareQuantile(p, df), expected);
  });
});

describe('gamma family', () => {
  it('gives the values of R', () => {
    for (const [x, psi, psiPrime, lnG] of GAMMA_FAMILY) {
      expectRelative(digamma(x), psi, 1e-12);
      expectRelative(trigamma(x), psiPrime, 1e-12);
      if (lnG === 0) expect(lnGamma(x)).toBe(0);
      else expectRelative(lnGamma(x), lnG, 1e-13);
    }
  });

  it('gives the logarithm of the beta function, small and large', () => {
    expectRelative(lnBeta(2, 3), Math.log(1 / 12), 1e-14); // B(2, 3) = 1!·2!/4!
    expectRelative(lnBeta(50000, 0.5), -4.837521699280441, 1e-13); // R 4.2.2 lbeta
    expectRelative(lnBeta(12, 30), -25.27486496841981, 1e-13); // R 4.2.2 lbeta
  });

  it('inverts trigamma over eleven decades', () => {
    for (const x of [1e-4, 0.01, 0.3, 1, 3.2578395, 50, 1e5]) expectRelative(trigammaInverse(trigamma(x)), x, 1e-9);
  });
});
