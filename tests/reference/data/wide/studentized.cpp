// Both tails of studentized distributions in quadruple precision (113 bits, libquadmath), for reference values.
//
// Reads lines "range K DF Q", "maximum K DF M", "both DF D N LOADING..." or "greater DF D N LOADING..." (DF may be inf)
// and writes the lower and the upper tail for each, 20 digits, and the last change by halving both steps.
//
// S: density of s with df*S^2 chi-squared, in u = log s: c exp(-(df/2)(e^2u - 1 - 2u)). Inner probabilities for known
// sigma, straight from the definition:
//   range:    k int phi(z) {Phi(z)^(k-1) - [Phi(z) - Phi(z-w)]^(k-1)} dz, and k int phi(z) [Phi(z) - Phi(z-w)]^(k-1) dz
//   maximum:  1 - erf(w/sqrt 2)^k and its complement
//   to one:   int phi(z) {1 - prod B_i} dz and int phi(z) prod B_i dz, B_i = P(|l_i z + c_i Z| <= w) or P(l_i z + c_i Z <= w)
// Differences are left as they stand: 34 digits less the 14 of the smallest tails leave 18 or more.
// Plain trapezoidal sums on u = h i and z = g j over the whole line. Steps h and g are halved together until the sums
// change by less than AGREE, relative to each tail; the sum on the finest steps is the answer.
#include <quadmath.h>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <functional>
#include <sstream>
#include <iostream>
#include <string>
#include <vector>
typedef __float128 real;
struct Pair { real lower, upper; };
static const real ROOT2 = sqrtq(2), ROOT2PI = sqrtq(2 * M_PIq);
static real AGREE = 1e-13Q;
static const real REST = 1e-24Q;
static real Phi(real x) { return erfcq(-x / ROOT2) / 2; }
static real phi(real x) { return expq(-x * x / 2) / ROOT2PI; }
static real power(real x, int n) { real r = 1; while (n) { if (n & 1) r *= x; x *= x; n >>= 1; } return r; }
// Phi(high) - Phi(low) from the side where both are small.
static real between(real low, real high) { return low + high > 0 ? Phi(-low) - Phi(-high) : Phi(high) - Phi(low); }

struct Family { virtual Pair known(real w, real g) = 0; virtual real step() = 0; virtual void restep(real) {} virtual ~Family() {} };

struct Maximum : Family {
  int k; Maximum(int k) : k(k) {}
  real step() override { return 1; }
  Pair known(real w, real) override { real p = power(erfq(w / ROOT2), k), t = erfcq(w / ROOT2); return { p, t > 0.01Q ? 1 - p : -expm1q(k * log1pq(-t)) }; }
};

struct Range : Family {
  int k; Range(int k) : k(k) {}
  std::vector<real> z, f, below, above, full;
  real step() override { return 0.5Q / (1 + 0.6Q * logq((real)k / 2)); }
  void restep(real g) override {
    z.clear(); f.clear(); below.clear(); above.clear(); full.clear();
    for (int j = (int)(-12 / g); j * g < 23; j++) {
      real x = j * g; z.push_back(x); f.push_back(k * phi(x)); below.push_back(Phi(x)); above.push_back(Phi(-x)); full.push_back(power(Phi(x), k - 1));
    }
  }
  Pair known(real w, real g) override {
    real lower = 0, upper = 0;
    for (size_t j = 0; j < z.size(); j++) {
      // Beyond z = 12 only the upper tail counts, where the largest is far out because the range is.
      real inside = 2 * z[j] > w ? Phi(w - z[j]) - above[j] : below[j] - Phi(z[j] - w);
      if (2 * z[j] > w && z[j] > w + 12) continue;
      real p = power(inside, k - 1);
      lower += f[j] * p; upper += f[j] * (full[j] - p);
    }
    return { g * lower, g * upper };
  }
};

struct ToOne : Family {
  bool both; std::vector<real> l, c; std::vector<int> n; real largest = 0, narrow = 1; int count = 0;
  ToOne(bool both, std::vector<double> loadings) : both(both) {
    for (double x : loadings) {
      count++; size_t i = 0; while (i < l.size() && l[i] != x) i++;
      if (i == l.size()) { l.push_back(x); n.push_back(0); real r = sqrtq((1 - (real)x) * (1 + (real)x)); c.push_back(r); if (r < narrow) narrow = r; if (fabsq(x) > largest) largest = fabsq(x); }
      n[i]++;
    }
  }
  real step() override { return (narrow < 0.7Q ? narrow : 0.7Q) / (1.2Q + 0.4Q * logq((real)count)); }
  Pair known(real w, real g) override {
    real lower = 0, upper = 0, reach = 11 + largest * (fabsq(w) < 12 ? fabsq(w) : 12);
    for (int j = both ? 0 : (int)(-reach / g); j * g < reach; j++) {
      real x = j * g, p = 1, f = phi(x);
      if (both && j > 0) f *= 2;
      for (size_t i = 0; i < l.size(); i++) {
        real m = l[i] * x;
        p *= power(both ? between((m - w) / c[i], (m + w) / c[i]) : Phi((w - m) / c[i]), n[i]);
        if (p < 1e-60Q) { p = p < 0 ? 0 : p; if (f * p < 1e-90Q) break; }
      }
      lower += f * p; upper += f * (1 - p);
    }
    return { g * lower, g * upper };
  }
};

static Pair mixture(Family &family, real q, double df, real g, real h) {
  family.restep(g);
  if (__builtin_isinf(df)) return family.known(q, g);
  real a = (real)df / 2, constant = logq((real)2) + a * logq(a) - lgammaq(a) - a;
  Pair sum = { 0, 0 };
  for (int direction = 1; direction >= -1; direction -= 2) {
    real lastl = -1, lastu = -1;
    for (int i = direction > 0 ? 0 : -1;; i += direction) {
      real u = h * i, density = expq(constant - a * (expm1q(2 * u) - 2 * u));
      Pair p = family.known(q * expq(u), g);
      real tl = h * density * p.lower, tu = h * density * p.upper;
      sum.lower += tl; sum.upper += tu;
      if (tl <= lastl && tu <= lastu && fabsq(tl) <= REST * sum.lower && fabsq(tu) <= REST * sum.upper) break;
      // Neither tail's terms grow any more where the density itself has vanished.
      if (density < 1e-300Q && std::abs(i) > 1000000) break;
      lastl = tl; lastu = tu;
    }
  }
  return sum;
}

static std::string text(real x) { char b[64]; quadmath_snprintf(b, 64, "%.19Qe", x); return b; }

int main(int argc, char **argv) {
  if (argc > 1) AGREE = strtoflt128(argv[1], 0);
  std::string line;
  while (std::getline(std::cin, line)) {
    std::istringstream in(line); std::string kind, dft; in >> kind;
    auto num = [&] { std::string t; in >> t; return strtod(t.c_str(), 0); };
    Family *family; double df, q; 
    if (kind == "range" || kind == "maximum") { int k = (int)num(); df = num(); q = num(); family = kind == "range" ? (Family *)new Range(k) : new Maximum(k); }
    else { df = num(); q = num(); int n = (int)num(); std::vector<double> l; for (int i = 0; i < n; i++) l.push_back(num()); family = new ToOne(kind == "both", l); }
    real g = family->step(), h = 0.1Q, width = 0.6Q / sqrtq(2 * (real)df); if (width < h) h = width;
    Pair before = mixture(*family, q, df, g, h), now = before; real change = 1;
    for (int i = 0; i < 5 && !(change < AGREE); i++) {
      g /= 2; h /= 2; now = mixture(*family, q, df, g, h);
      real a = fabsq(now.lower / before.lower - 1), b = fabsq(now.upper / before.upper - 1);
      change = a > b ? a : b; before = now;
    }
    printf("%s %s %.1e\n", text(now.lower).c_str(), text(now.upper).c_str(), (double)change); fflush(stdout);
    delete family;
  }
}
