#include "sample.h"

#include <limits>
#include <random>
#include <utility>

#include "kinegate/judge_stream.h"

namespace kinegate::testing {

Sample::Sample(int events) {
  constexpr double kPi = 3.141592653589793;
  for (int i = 0; i < events; ++i) {
    std::mt19937 random(static_cast<unsigned>(i));
    const auto uniform = [&random] { return static_cast<double>(random()) / 4294967296.0; };
    const int photons = 2 + static_cast<int>(random() % 5);
    for (int k = 0; k < photons; ++k) {
      energy.push_back(0.05 + 0.4 * uniform());
      theta.push_back(kPi * uniform());
      phi.push_back(kPi * (2 * uniform() - 1));
      classes.push_back(v1::OBJECT_CLASS_PHOTON);
    }
    if (i % 50 == 49) energy.back() = std::numeric_limits<double>::quiet_NaN();
    ids.push_back(i);
    offsets.push_back(offsets.back() + photons);
  }
}

EventArrays Sample::arrays() const {
  EventArrays arrays;
  arrays.run_number = 1;
  arrays.event_ids = ids;
  arrays.object_offsets = offsets;
  arrays.coordinates = Coordinates::kMomentumAngles;
  arrays.values[0] = energy;
  arrays.values[1] = theta;
  arrays.values[2] = phi;
  arrays.object_classes = classes;
  return arrays;
}

Full::Full(int events) : sample(events) {
  const std::size_t n = sample.ids.size(), objects = sample.classes.size();
  for (std::size_t i = 0; i < 6 * objects; ++i) numbers.push_back(1e-3 * static_cast<double>(i));
  for (std::size_t i = 0; i < objects; ++i) {
    masks.push_back(static_cast<std::uint8_t>(i % 8));
    groups.push_back(static_cast<std::int32_t>(i % 2));
  }
  for (std::size_t i = 0; i <= n; ++i) one_each.push_back(static_cast<std::int32_t>(i));
}

EventArrays Full::arrays() const {
  const std::size_t n = sample.ids.size(), objects = sample.classes.size();
  const auto column = [this](std::size_t from, std::size_t size) {
    return Column<double>(numbers.data() + from, size);
  };
  EventArrays a = sample.arrays();
  a.run_number = 7;
  a.measured_mask = a.species_mask = masks;
  a.covariance = numbers;
  a.beam = {one_each, column(1, n), column(2, n), column(3, n)};
  a.vertex = {column(4, n), column(5, n), column(6, n), column(7, 6 * n)};
  a.vertex_group = {groups, one_each, column(8, n), column(9, n), column(10, n), column(11, 6 * n)};
  a.cluster_position = {column(12, objects), column(13, objects), column(14, objects)};
  a.polarisation = {column(15, n), column(16, n), column(17, n)};
  return a;
}

v1::Selection PairSelection() {
  v1::Selection selection;
  selection.set_name("pairs");
  v1::Hypothesis* pair = selection.add_hypotheses();
  pair->set_name("pair");
  pair->set_reaction("pi0 -> gamma gamma");
  pair->mutable_extra_objects()->mutable_any();
  const auto mass = [](v1::Window* window) {
    v1::MassWindow* of = window->mutable_invariant_mass();
    of->add_products("gamma[0]");
    of->add_products("gamma[1]");
    return of;
  };
  v1::MassWindow* cut = mass(pair->mutable_condition()->mutable_window());
  cut->set_min_gev(0.1);
  cut->set_max_gev(0.2);
  v1::Window* record = pair->add_record();
  record->set_name("mass");
  mass(record);
  return selection;
}

v1::JudgeOpen OpenWith(v1::Selection selection) {
  v1::JudgeOpen open;
  *open.mutable_selection() = Given(std::move(selection));
  open.set_entries(v1::ENTRY_DETAIL_ALL);
  open.mutable_limits()->set_block_event_count(1000);
  open.mutable_limits()->set_block_object_count(8000);
  return open;
}

}  // namespace kinegate::testing
