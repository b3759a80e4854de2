// The Ising model on an L x L torus, exactly (Kaufman 1949; notation of Ferdinand & Fisher 1969).
//
//   Z = 1/2 (2 sinh 2b)^(L^2/2) { prod_r 2 cosh(L g_2r+1 / 2) + prod_r 2 sinh(L g_2r+1 / 2)
//                               + prod_r 2 cosh(L g_2r / 2)   + prod_r 2 sinh(L g_2r / 2) }
//   r = 0 .. L-1,  cosh g_l = cosh 2b coth 2b - cos(pi l / L),  g_0 = 2b + ln tanh b with its sign
// b: inverse temperature for spins +-1; as a two-label Potts field beta = 2 b.
// Formula from memory; references_test.cc checks it against all 2^16 states of the 4 x 4 torus.
#ifndef STILLFIELD_TESTS_EXACTNESS_KAUFMAN_H_
#define STILLFIELD_TESTS_EXACTNESS_KAUFMAN_H_

namespace stillfield::exactness {

long double torus_log_z(int side, long double b);

// Energy per site, u = -(d ln Z / d b) / L^2, by central differences with one Richardson step.
double torus_energy(int side, double b);

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_KAUFMAN_H_
