// What designs are computed with: angles as fractions of a turn, exponentials and powers, and complex numbers of the
// few operations that designs need. By exact_math and + - * / sqrt alone, so that a design has the same bits on every
// machine: the C library's functions differ by an ulp, and poles near z = 1 magnify an ulp a millionfold, which would
// reach the nine digits of a judged figure. Private to this room.
#pragma once

namespace halflsb {

inline constexpr double pi_in_designs = 3.14159265358979323846;

struct SineCosine {
    double sine = 0.0, cosine = 1.0;
};

/// Of 2 pi times numerator / denominator, both at least 0 and finite, denominator positive; error below 8e-17 each,
/// however many turns it is.
SineCosine sine_cosine(double numerator, double denominator);

/// tan(pi frequency_hz / rate_hz), the frequency of an analogue filter of unit scale that the bilinear transform
/// s = (1 - z^-1) / (1 + z^-1) puts at frequency_hz. 0 <= frequency_hz < rate_hz / 2.
double warped(double frequency_hz, double rate_hz);

/// e^x, error below 2^-51 of the result; |x| at most 700.
double exponential(double x);
/// 10^(numerator / denominator), the quotient taken in 128 bits; denominator positive.
double power_of_ten(double numerator, double denominator);
/// 10^(level_db / 20).
inline double ratio_of_db(double level_db) { return power_of_ten(level_db, 20.0); }
/// base^x for a positive base.
double power(double base, double x);
/// sinh x and arsinh x, relative error below 2^-49, near 0 too.
double hyperbolic_sine(double x);
double inverse_hyperbolic_sine(double x);

/// re + j im. std::complex multiplies and divides as its compiler likes.
struct Complex {
    double re = 0.0, im = 0.0;
};
inline Complex operator+(Complex a, Complex b) { return {a.re + b.re, a.im + b.im}; }
inline Complex operator*(Complex a, Complex b) { return {a.re * b.re - a.im * b.im, a.re * b.im + a.im * b.re}; }
inline Complex operator*(double a, Complex b) { return {a * b.re, a * b.im}; }
inline double square_of_size(Complex a) { return a.re * a.re + a.im * a.im; }
/// 1 / a.
inline Complex inverse(Complex a) {
    const double square = square_of_size(a);
    return {a.re / square, -a.im / square};
}
/// The root in the right half-plane, neither part losing digits to the other.
Complex square_root(Complex a);

}  // namespace halflsb
