// Fills a ring in shared memory with the events of a file at a set rate, in the place of a readout:
//
//   kinegate_ring_feed --ring /kinegate --events FILE.kgb --rate 50000 --seconds 10
//
// It waits a moment for the trigger node to join, and for it to read the rest at the end.
#include <algorithm>
#include <iostream>
#include <thread>

#include "kinegate/error.h"
#include "options.h"
#include "ring.h"
#include "source.h"

namespace kinegate::trigger {
namespace {

constexpr char kAbout[] =
    "Fills a ring in shared memory with the events of a .kgb file at a rate, for kinegate_trigger.\n"
    "A slot of the ring has momentum, theta, phi, class and measured mask of up to 16 objects and\n"
    "energy, sigma and time of up to 16 beam candidates. It cannot carry covariances, species masks,\n"
    "vertices, vertex groups, cluster positions or polarisation: a selection with a fit needs\n"
    "kinegate_trigger --events instead.\n"
    "Flags, with their defaults:";
constexpr std::uint32_t kSlots = 1 << 14;
constexpr std::size_t kMost = 64;

int Main(int argc, char** argv) {
  const Options options(
      argc, argv,
      {{"ring", "/kinegate"}, {"events", ""}, {"rate", "10000"}, {"seconds", "10"}, {"join_ms", "500"}});
  if (options.help()) {
    std::cout << kAbout << options.usage() << "\n";
    return 0;
  }
  const double rate = options.number("rate", kMostRate), seconds = options.number("seconds", kMostSeconds);
  const std::chrono::milliseconds join(options.whole("join_ms", 1, 1'000'000));
  const Events events = ReadBlockFile(options.text("events"));
  if (events.coordinates != Coordinates::kMomentumAngles) {
    throw Error("the ring holds momentum and angles; " + options.text("events") + " does not",
                grpc::StatusCode::INVALID_ARGUMENT);
  }
  if (const std::string names = LeftOut(events); !names.empty()) {
    std::cerr << "the ring cannot carry " << names << "; " << options.text("events")
              << " has them, and the node will not\n";
  }
  const auto source = FromFile(options.text("events"), rate, std::chrono::duration<double>(seconds));
  Ring ring = Ring::Create(options.text("ring"), kSlots);
  std::this_thread::sleep_for(join);
  Batch batch;
  while (source->Take(kMost, std::chrono::microseconds(50), &batch)) {
    for (std::size_t i = 0; i < batch.count; ++i) {
      Slot slot = MakeSlot(events, batch.first + i);
      slot.arrived_ns = std::chrono::nanoseconds(batch.arrived[i].time_since_epoch()).count();
      ring.Write(slot);
    }
  }
  ring.Finish();
  for (int looks = 0; looks < 100 && !ring.finished(); ++looks) {
    std::this_thread::sleep_for(std::chrono::milliseconds(50));
  }
  return 0;
}

}  // namespace
}  // namespace kinegate::trigger

int main(int argc, char** argv) {
  try {
    return kinegate::trigger::Main(argc, argv);
  } catch (const kinegate::Error& error) {
    std::cerr << error.what() << "\n";
    return 2;
  }
}
