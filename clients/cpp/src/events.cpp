#include "kinegate/events.h"

#include <cstring>
#include <string>

#include "kinegate/error.h"

namespace kinegate {
namespace {

static_assert(__BYTE_ORDER__ == __ORDER_LITTLE_ENDIAN__, "columns are little-endian and copied as they are");

// Range is a range of rows: of events, of their objects or of their candidates.
struct Range {
  std::size_t first, count;
};

[[noreturn]] void Fail(const std::string& message) {
  throw Error(message, grpc::StatusCode::INVALID_ARGUMENT);
}

void CheckLength(const char* name, std::size_t length, std::size_t due) {
  if (length != due) {
    Fail(std::string(name) + " has " + std::to_string(length) + " entries where " + std::to_string(due) +
         " are due");
  }
}

// Rows finds the rows of a range of events by their offsets, which lie within the total.
Range Rows(const char* name, const Column<std::int32_t>& offsets, std::size_t events, Range of) {
  CheckLength(name, offsets.size(), events + 1);
  const std::size_t end = of.first + of.count;
  const std::int32_t first = offsets[of.first], last = offsets[end], total = offsets[events];
  bool rises = first >= 0;
  for (std::size_t i = of.first; i < end; ++i) rises = rises && offsets[i] <= offsets[i + 1];
  if (!rises) {
    Fail(std::string(name) + " runs from " + std::to_string(first) + " to " + std::to_string(last) +
         "; offsets start at 0 and never fall");
  }
  if (last > total) {
    Fail(std::string(name) + " runs to " + std::to_string(last) + ", beyond the total of " +
         std::to_string(total));
  }
  return {static_cast<std::size_t>(first), static_cast<std::size_t>(last - first)};
}

// Copy copies rows of a column with `each` numbers a row.
template <typename T>
std::string Copy(const char* name, const Column<T>& column, std::size_t rows, Range of,
                 std::size_t each = 1) {
  CheckLength(name, column.size(), rows * each);
  return of.count == 0 ? std::string()
                       : std::string(reinterpret_cast<const char*>(column.data() + of.first * each),
                                     of.count * each * sizeof(T));
}

// CopyOffsets copies the offsets of a range of events, moved to start at 0.
std::string CopyOffsets(const Column<std::int32_t>& offsets, Range of) {
  std::string bytes((of.count + 1) * sizeof(std::int32_t), '\0');
  for (std::size_t i = 0; i <= of.count; ++i) {
    const std::int32_t moved = offsets[of.first + i] - offsets[of.first];
    std::memcpy(bytes.data() + i * sizeof moved, &moved, sizeof moved);
  }
  return bytes;
}

void SetCoordinates(const EventArrays& events, std::size_t rows, Range of, v1::EventBlock* block) {
  const auto column = [&](int i, const char* name) { return Copy(name, events.values[i], rows, of); };
  switch (events.coordinates) {
    case Coordinates::kEnergyMomentum: {
      auto* c = block->mutable_energy_momentum();
      c->set_energy_gev(column(0, "energy"));
      c->set_px_gev(column(1, "px"));
      c->set_py_gev(column(2, "py"));
      c->set_pz_gev(column(3, "pz"));
      return;
    }
    case Coordinates::kMomentumMass: {
      auto* c = block->mutable_momentum_mass();
      c->set_px_gev(column(0, "px"));
      c->set_py_gev(column(1, "py"));
      c->set_pz_gev(column(2, "pz"));
      c->set_mass_gev(column(3, "mass"));
      return;
    }
    case Coordinates::kTransverseMomentum: {
      auto* c = block->mutable_transverse_momentum();
      c->set_transverse_momentum_gev(column(0, "transverse momentum"));
      c->set_pseudorapidity(column(1, "pseudorapidity"));
      c->set_phi_rad(column(2, "phi"));
      c->set_mass_gev(column(3, "mass"));
      return;
    }
    case Coordinates::kMomentumAngles: {
      auto* c = block->mutable_momentum_angles();
      c->set_momentum_gev(column(0, "momentum"));
      c->set_theta_rad(column(1, "theta"));
      c->set_phi_rad(column(2, "phi"));
      return;
    }
    case Coordinates::kMomentumSlopes: {
      auto* c = block->mutable_momentum_slopes();
      c->set_momentum_gev(column(0, "momentum"));
      c->set_slope_x(column(1, "slope_x"));
      c->set_slope_y(column(2, "slope_y"));
      return;
    }
  }
  Fail("no such coordinate set");
}

void SetBeam(const EventArrays& events, Range of, v1::EventBlock* block) {
  const BeamArrays& beam = events.beam;
  if (!beam.offsets.present()) return;
  const Range rows = Rows("beam.offsets", beam.offsets, events.event_count(), of);
  const auto all = static_cast<std::size_t>(beam.offsets[events.event_count()]);
  auto* b = block->mutable_beam();
  b->set_offsets(CopyOffsets(beam.offsets, of));
  b->set_energy_gev(Copy("beam.energy_gev", beam.energy_gev, all, rows));
  b->set_sigma_gev(Copy("beam.sigma_gev", beam.sigma_gev, all, rows));
  b->set_time_ns(Copy("beam.time_ns", beam.time_ns, all, rows));
}

constexpr std::size_t kCovariance = 6;  // entries of a packed 3x3 covariance

void SetVertex(const EventArrays& events, Range of, v1::EventBlock* block) {
  const VertexArrays& vertex = events.vertex;
  if (!vertex.x_m.present()) return;
  const std::size_t n = events.event_count();
  auto* v = block->mutable_vertex();
  v->set_x_m(Copy("vertex.x_m", vertex.x_m, n, of));
  v->set_y_m(Copy("vertex.y_m", vertex.y_m, n, of));
  v->set_z_m(Copy("vertex.z_m", vertex.z_m, n, of));
  if (vertex.covariance_m2.present()) {
    v->set_covariance_m2(Copy("vertex.covariance_m2", vertex.covariance_m2, n, of, kCovariance));
  }
}

void SetVertexGroup(const EventArrays& events, std::size_t objects, Range of_objects, Range of,
                    v1::EventBlock* block) {
  const VertexGroupArrays& group = events.vertex_group;
  if (!group.groups.present()) return;
  const Range rows = Rows("vertex_group.offsets", group.offsets, events.event_count(), of);
  const auto all = static_cast<std::size_t>(group.offsets[events.event_count()]);
  auto* g = block->mutable_vertex_group();
  g->set_groups(Copy("vertex_group.groups", group.groups, objects, of_objects));
  g->set_offsets(CopyOffsets(group.offsets, of));
  g->set_x_m(Copy("vertex_group.x_m", group.x_m, all, rows));
  g->set_y_m(Copy("vertex_group.y_m", group.y_m, all, rows));
  g->set_z_m(Copy("vertex_group.z_m", group.z_m, all, rows));
  if (group.covariance_m2.present()) {
    g->set_covariance_m2(Copy("vertex_group.covariance_m2", group.covariance_m2, all, rows, kCovariance));
  }
}

void SetClusterPosition(const EventArrays& events, std::size_t objects, Range of, v1::EventBlock* block) {
  const ClusterPositionArrays& position = events.cluster_position;
  if (!position.x_m.present()) return;
  auto* p = block->mutable_cluster_position();
  p->set_x_m(Copy("cluster_position.x_m", position.x_m, objects, of));
  p->set_y_m(Copy("cluster_position.y_m", position.y_m, objects, of));
  p->set_z_m(Copy("cluster_position.z_m", position.z_m, objects, of));
}

void SetPolarisation(const EventArrays& events, Range of, v1::EventBlock* block) {
  const PolarisationArrays& polarisation = events.polarisation;
  if (!polarisation.linear_degree.present()) return;
  const std::size_t n = events.event_count();
  auto* p = block->mutable_polarisation();
  p->set_linear_degree(Copy("polarisation.linear_degree", polarisation.linear_degree, n, of));
  p->set_plane_rad(Copy("polarisation.plane_rad", polarisation.plane_rad, n, of));
  p->set_circular_degree(Copy("polarisation.circular_degree", polarisation.circular_degree, n, of));
}

}  // namespace

v1::EventBlock MakeBlock(const EventArrays& events, std::size_t first, std::size_t count) {
  const std::size_t n = events.event_count();
  if (first > n || count > n - first) {
    Fail("events " + std::to_string(first) + " to " + std::to_string(first + count) + " are asked for of " +
         std::to_string(n));
  }
  const Range of{first, count};
  const Range rows = Rows("object_offsets", events.object_offsets, n, of);
  const std::size_t all = events.object_classes.size();
  CheckLength("object_classes", all, static_cast<std::size_t>(events.object_offsets[n]));

  v1::EventBlock block;
  block.set_run_number(events.run_number);
  block.set_event_ids(Copy("event_ids", events.event_ids, n, of));
  block.set_object_offsets(CopyOffsets(events.object_offsets, of));
  block.set_object_classes(Copy("object_classes", events.object_classes, all, rows));
  SetCoordinates(events, all, rows, &block);
  if (events.measured_mask.present()) {
    block.mutable_measured_mask()->set_masks(Copy("measured_mask", events.measured_mask, all, rows));
  }
  if (events.species_mask.present()) {
    block.mutable_species_mask()->set_masks(Copy("species_mask", events.species_mask, all, rows));
  }
  if (events.covariance.present()) {
    block.mutable_covariance()->set_elements(Copy("covariance", events.covariance, all, rows, kCovariance));
  }
  SetBeam(events, of, &block);
  SetVertex(events, of, &block);
  SetVertexGroup(events, all, rows, of, &block);
  SetClusterPosition(events, all, rows, &block);
  SetPolarisation(events, of, &block);
  return block;
}

v1::EventBlock MakeBlock(const EventArrays& events) {
  return MakeBlock(events, 0, events.event_count());
}

}  // namespace kinegate
