// Judges two invented events and waits for the verdicts: futures ADDRESS
#include <kinegate/events.h>
#include <kinegate/judge_stream.h>

#include <iostream>
#include <vector>

namespace {

// A pi0 in two photons, the mass of which is recorded.
kinegate::v1::Selection Pi0() {
  kinegate::v1::Selection selection;
  selection.set_name("pi0");
  auto* hypothesis = selection.add_hypotheses();
  hypothesis->set_name("pi0");
  hypothesis->set_reaction("pi0 -> gamma gamma");
  auto* window = hypothesis->mutable_condition()->mutable_window()->mutable_invariant_mass();
  window->add_products("gamma[0]");
  window->add_products("gamma[1]");
  window->set_min_gev(0.11);
  window->set_max_gev(0.16);
  auto* recorded = hypothesis->add_record()->mutable_invariant_mass();
  recorded->add_products("gamma[0]");
  recorded->add_products("gamma[1]");
  return selection;
}

}  // namespace

int main(int argc, char** argv) {
  if (argc != 2) {
    std::cerr << "usage: futures ADDRESS\n";
    return 2;
  }
  // Two photons at a right angle: the mass is sqrt(2 E1 E2).
  const std::vector<std::int64_t> ids{1, 2};
  const std::vector<std::int32_t> offsets{0, 2, 4};
  const std::vector<double> energy{0.095, 0.095, 1, 1}, theta{0.5, 2.070796326794897, 0.5, 2.070796326794897},
      phi{1, 1, 1, 1};
  const std::vector<std::uint8_t> classes(4, kinegate::v1::OBJECT_CLASS_PHOTON);
  kinegate::EventArrays events;
  events.event_ids = ids;
  events.object_offsets = offsets;
  events.coordinates = kinegate::Coordinates::kMomentumAngles;
  events.values[0] = energy;
  events.values[1] = theta;
  events.values[2] = phi;
  events.object_classes = classes;

  try {
    kinegate::v1::JudgeOpen open;
    *open.mutable_selection() = kinegate::Given(Pi0());
    open.set_entries(kinegate::v1::ENTRY_DETAIL_ALL);
    // Smaller blocks leave room for all entries.
    open.mutable_limits()->set_block_event_count(1000);
    open.mutable_limits()->set_block_object_count(8000);
    kinegate::JudgeStream stream(kinegate::Gate(argv[1]), open);
    const kinegate::Verdicts verdicts = stream.Push(kinegate::MakeBlock(events)).get();
    for (std::size_t i = 0; i < verdicts.event_count(); ++i) {
      std::cout << "event " << ids[i] << ": " << (verdicts.gate(i) ? "accepted" : "rejected") << ", mass "
                << verdicts.entries(i).at(0).observables.at(0) << " GeV\n";
    }
    stream.Finish();
  } catch (const kinegate::Error& error) {
    std::cerr << error.reason() << " " << error.what() << "\n";
    return 1;
  }
}
