// Moments of Rician noise, y = |s + n1 + i n2| with n1, n2 ~ N(0, 1); s is the signal in units of
// the noise's standard deviation.
//
// Maths    E y^2 = s^2 + 2
//          E y   = sqrt(pi/8) e^(-s^2/4) [(2 + s^2) I0(s^2/4) + s^2 I1(s^2/4)]
//          Var y = s^2 + 2 - (E y)^2, from 2 - pi/2 (Rayleigh) at s = 0 to 1
//          p(y)  = y e^(-(y^2 + s^2)/2) I0(s y)
//          Rice 1944; Koay & Basser 2006, "Analytically exact correction scheme for signal
//          extraction from noisy magnitude MR signals", whose fixed-point equation is the inverse
// Ranges   s >= 0; errors below kRicianMaxRelError
#ifndef STILLFIELD_MODEL_NOISE_RICIAN_H_
#define STILLFIELD_MODEL_NOISE_RICIAN_H_

namespace stillfield {

inline constexpr double kRicianMaxRelError = 1e-9;

// Density of y >= 0.
double rician_density(double y, double s);

double rician_mean(double s);
double rician_variance(double s);

// The signal-to-noise ratio s at which E y / sd y equals `ratio`; 0 for ratios below Rayleigh's
// sqrt(pi / (4 - pi)) = 1.913.
double rician_signal(double ratio);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_NOISE_RICIAN_H_
