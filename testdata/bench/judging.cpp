// Judging six photons as three pairs of a mass window, as a plain loop: directions and 15
// pair masses of each event, accepted if one of the 15 ways to pair all six has every mass
// in the window. Reads events as float64 rows (E, theta, phi), six rows an event, and prints
// how many are accepted and nanoseconds of processor time an event, one thread.
//
// g++ -O2 -o judging judging.cpp && ./judging EVENTS_FILE
#include <cmath>
#include <cstdio>
#include <ctime>
#include <fstream>
#include <iterator>
#include <vector>

constexpr int kPhotons = 6;
constexpr double kMin = 0.11, kMax = 0.16;

static bool accepts(const double* rows) {
  double x[kPhotons], y[kPhotons], z[kPhotons];
  bool inside[kPhotons][kPhotons];
  for (int i = 0; i < kPhotons; ++i) {
    const double theta = rows[3 * i + 1], phi = rows[3 * i + 2], s = std::sin(theta);
    x[i] = s * std::cos(phi);
    y[i] = s * std::sin(phi);
    z[i] = std::cos(theta);
  }
  for (int i = 0; i < kPhotons; ++i)
    for (int j = i + 1; j < kPhotons; ++j) {
      const double dx = x[i] - x[j], dy = y[i] - y[j], dz = z[i] - z[j];
      const double m = std::sqrt(rows[3 * i] * rows[3 * j] * (dx * dx + dy * dy + dz * dz));
      inside[i][j] = m >= kMin && m < kMax;
    }
  for (int j = 1; j < kPhotons; ++j) {
    if (!inside[0][j]) continue;
    int rest[4], n = 0;
    for (int k = 1; k < kPhotons; ++k)
      if (k != j) rest[n++] = k;
    const int *r = rest;
    if ((inside[r[0]][r[1]] && inside[r[2]][r[3]]) || (inside[r[0]][r[2]] && inside[r[1]][r[3]]) ||
        (inside[r[0]][r[3]] && inside[r[1]][r[2]]))
      return true;
  }
  return false;
}

int main(int argc, char** argv) {
  if (argc != 2) return 2;
  std::ifstream file(argv[1], std::ios::binary);
  std::vector<char> bytes((std::istreambuf_iterator<char>(file)), std::istreambuf_iterator<char>());
  const auto* rows = reinterpret_cast<const double*>(bytes.data());
  const long events = static_cast<long>(bytes.size() / sizeof(double) / 3 / kPhotons);
  double best = 1e300, spent = 0;
  long accepted = 0;
  while (spent < 1) {
    constexpr int passes = 10;
    const std::clock_t begun = std::clock();
    for (int pass = 0; pass < passes; ++pass) {
      accepted = 0;
      for (long k = 0; k < events; ++k) accepted += accepts(rows + k * kPhotons * 3);
    }
    const double took = static_cast<double>(std::clock() - begun) / CLOCKS_PER_SEC;
    spent += took;
    if (took / passes < best) best = took / passes;
  }
  std::printf("accepted %ld\nloop %.2f\n", accepted, best / static_cast<double>(events) * 1e9);
}
