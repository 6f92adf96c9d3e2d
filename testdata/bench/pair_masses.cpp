// Six-photon pair masses as a plain loop: m = sqrt(E1 E2 |u1 - u2|^2) for the 15 pairs of
// each event. Reads events as float64 rows (E, ux, uy, uz), six rows an event, and prints
// nanoseconds of processor time an event, one thread.
//
// g++ -O2 -o pair_masses pair_masses.cpp && ./pair_masses EVENTS_FILE
#include <cmath>
#include <cstdio>
#include <ctime>
#include <fstream>
#include <iterator>
#include <vector>

int main(int argc, char** argv) {
  if (argc != 2) return 2;
  std::ifstream file(argv[1], std::ios::binary);
  std::vector<char> bytes((std::istreambuf_iterator<char>(file)), std::istreambuf_iterator<char>());
  const auto* rows = reinterpret_cast<const double*>(bytes.data());
  constexpr int photons = 6, pairs = 15, passes = 10;
  const long events = static_cast<long>(bytes.size() / sizeof(double) / 4 / photons);
  std::vector<double> out(events * pairs);
  double best = 1e300, spent = 0;
  while (spent < 1) {
    const std::clock_t begun = std::clock();
    for (int pass = 0; pass < passes; ++pass) {
      double* m = out.data();
      for (long k = 0; k < events; ++k) {
        const double* e = rows + k * photons * 4;
        for (int i = 0; i < photons; ++i)
          for (int j = i + 1; j < photons; ++j) {
            const double *a = e + 4 * i, *b = e + 4 * j;
            const double x = a[1] - b[1], y = a[2] - b[2], z = a[3] - b[3];
            *m++ = std::sqrt(a[0] * b[0] * (x * x + y * y + z * z));
          }
      }
    }
    const double took = static_cast<double>(std::clock() - begun) / CLOCKS_PER_SEC;
    spent += took;
    if (took / passes < best) best = took / passes;
  }
  double sum = 0;
  for (double m : out) sum += m;
  std::printf("sum %.9f\nloop %.2f\n", sum, best / static_cast<double>(events) * 1e9);
}
