// Judges a thousand blocks of invented photons with a latency budget, by callback:
//   callbacks ADDRESS SELECTION
// SELECTION names one that the server knows; late events are dropped.
#include <kinegate/events.h>
#include <kinegate/judge_stream.h>

#include <iostream>
#include <random>
#include <vector>

int main(int argc, char** argv) {
  if (argc != 3) {
    std::cerr << "usage: callbacks ADDRESS SELECTION\n";
    return 2;
  }
  constexpr int kEvents = 100, kPhotons = 4, kBlocks = 1000;
  std::mt19937 random(1);
  std::uniform_real_distribution<double> uniform(0.05, 1.5);
  std::vector<std::int64_t> ids;
  std::vector<std::int32_t> offsets{0};
  std::vector<double> values[3];
  for (int i = 0; i < kEvents; ++i) {
    ids.push_back(i);
    offsets.push_back(offsets.back() + kPhotons);
    for (int k = 0; k < kPhotons; ++k) {
      for (auto& column : values) column.push_back(uniform(random));
    }
  }
  const std::vector<std::uint8_t> classes(values[0].size(), kinegate::v1::OBJECT_CLASS_PHOTON);
  kinegate::EventArrays events;
  events.event_ids = ids;
  events.object_offsets = offsets;
  for (int i = 0; i < 3; ++i) events.values[i] = values[i];
  events.object_classes = classes;

  try {
    kinegate::v1::JudgeOpen open;
    *open.mutable_selection() = kinegate::Named(argv[2]);
    open.set_latency_budget_s(0.1);
    kinegate::JudgeOptions options;
    options.late = kinegate::LatePolicy::kReject;
    options.on_break = [](const kinegate::Error& why) { std::cerr << "broken: " << why.what() << "\n"; };
    // Handlers run one after the other, so they need no lock.
    long accepted = 0, judged = 0;
    {
      kinegate::JudgeStream stream(kinegate::Gate(argv[1]), open, options);
      for (int i = 0; i < kBlocks; ++i) {
        stream.Push(kinegate::MakeBlock(events), [&](const kinegate::Verdicts& verdicts) {
          for (std::size_t k = 0; k < verdicts.event_count(); ++k) {
            accepted += verdicts.gate(k) ? 1 : 0;
            judged += verdicts.late(k) ? 0 : 1;
          }
        });
      }
      stream.Finish();
    }
    std::cout << judged << " of " << kBlocks * kEvents << " events judged in time, " << accepted
              << " accepted\n";
  } catch (const kinegate::Error& error) {
    std::cerr << error.reason() << " " << error.what() << "\n";
    return 1;
  }
}
