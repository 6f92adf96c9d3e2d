#include "blockfile.h"

#include <google/protobuf/io/zero_copy_stream_impl.h>
#include <google/protobuf/util/delimited_message_util.h>

#include <cstring>
#include <fstream>
#include <initializer_list>

#include "kinegate/error.h"

namespace kinegate::trigger {
namespace {

constexpr std::uint8_t kAllMeasured = 7;
constexpr std::uint8_t kAnySpecies = 0;

template <typename T>
void Append(const std::string& column, std::vector<T>* to) {
  if (column.empty()) return;
  const std::size_t had = to->size();
  to->resize(had + column.size() / sizeof(T));
  std::memcpy(to->data() + had, column.data(), (to->size() - had) * sizeof(T));
}

// AppendOffsets appends offsets that start at 0 behind those of earlier blocks.
void AppendOffsets(const std::string& column, std::vector<std::int32_t>* to) {
  std::vector<std::int32_t> offsets;
  Append(column, &offsets);
  const std::int32_t before = to->back();
  for (std::size_t i = 1; i < offsets.size(); ++i) {
    // Unsigned, so that a broken file wraps around, which the check of the block then tells.
    to->push_back(static_cast<std::int32_t>(static_cast<std::uint32_t>(before) +
                                            static_cast<std::uint32_t>(offsets[i])));
  }
}

// AppendMasks appends masks of objects; those of a block without them say nothing.
void AppendMasks(const std::string& column, std::uint8_t nothing, std::size_t objects,
                 std::vector<std::uint8_t>* to) {
  Append(column, to);
  to->resize(objects, nothing);
}

void AppendThree(std::initializer_list<const std::string*> columns, std::vector<double>* to) {
  for (const std::string* column : columns) Append(*column, to++);
}

// Columns returns the coordinate set of a block and its columns.
Coordinates Columns(const v1::EventBlock& block, std::vector<const std::string*>* columns) {
  switch (block.coordinates_case()) {
    case v1::EventBlock::kEnergyMomentum: {
      const auto& c = block.energy_momentum();
      *columns = {&c.energy_gev(), &c.px_gev(), &c.py_gev(), &c.pz_gev()};
      return Coordinates::kEnergyMomentum;
    }
    case v1::EventBlock::kMomentumMass: {
      const auto& c = block.momentum_mass();
      *columns = {&c.px_gev(), &c.py_gev(), &c.pz_gev(), &c.mass_gev()};
      return Coordinates::kMomentumMass;
    }
    case v1::EventBlock::kTransverseMomentum: {
      const auto& c = block.transverse_momentum();
      *columns = {&c.transverse_momentum_gev(), &c.pseudorapidity(), &c.phi_rad(), &c.mass_gev()};
      return Coordinates::kTransverseMomentum;
    }
    case v1::EventBlock::kMomentumSlopes: {
      const auto& c = block.momentum_slopes();
      *columns = {&c.momentum_gev(), &c.slope_x(), &c.slope_y()};
      return Coordinates::kMomentumSlopes;
    }
    default: {
      const auto& c = block.momentum_angles();
      *columns = {&c.momentum_gev(), &c.theta_rad(), &c.phi_rad()};
      return Coordinates::kMomentumAngles;
    }
  }
}

void AppendBlock(const v1::EventBlock& block, Events* events) {
  std::vector<const std::string*> columns;
  events->coordinates = Columns(block, &columns);
  events->run_number = block.run_number();
  for (std::size_t i = 0; i < columns.size(); ++i) Append(*columns[i], &events->values[i]);
  Append(block.event_ids(), &events->ids);
  AppendOffsets(block.object_offsets(), &events->offsets);
  Append(block.object_classes(), &events->classes);
  AppendMasks(block.measured_mask().masks(), kAllMeasured, events->classes.size(), &events->measured);
  AppendMasks(block.species_mask().masks(), kAnySpecies, events->classes.size(), &events->species);
  Append(block.covariance().elements(), &events->covariance);
  if (block.has_beam()) {
    AppendOffsets(block.beam().offsets(), &events->beam_offsets);
    Append(block.beam().energy_gev(), &events->beam_energy);
    Append(block.beam().sigma_gev(), &events->beam_sigma);
    Append(block.beam().time_ns(), &events->beam_time);
  }
  events->beam_offsets.resize(events->ids.size() + 1, events->beam_offsets.back());
  const auto& vertex = block.vertex();
  AppendThree({&vertex.x_m(), &vertex.y_m(), &vertex.z_m()}, events->vertex);
  Append(vertex.covariance_m2(), &events->vertex_covariance);
  const auto& group = block.vertex_group();
  Append(group.groups(), &events->groups);
  AppendOffsets(group.offsets(), &events->group_offsets);
  AppendThree({&group.x_m(), &group.y_m(), &group.z_m()}, events->group_vertex);
  Append(group.covariance_m2(), &events->group_covariance);
  const auto& cluster = block.cluster_position();
  AppendThree({&cluster.x_m(), &cluster.y_m(), &cluster.z_m()}, events->cluster);
  const auto& polarisation = block.polarisation();
  AppendThree({&polarisation.linear_degree(), &polarisation.plane_rad(), &polarisation.circular_degree()},
              events->polarisation);
}

// Set points a column at numbers, where there are any.
template <typename T>
void Set(const std::vector<T>& from, Column<T>* column) {
  if (!from.empty()) *column = from;
}

// CheckSame checks that a block can stand behind the events before it.
void CheckSame(const std::string& name, const v1::EventBlock& block, const Events& events) {
  std::vector<const std::string*> columns;
  if (Columns(block, &columns) != events.coordinates) {
    throw Error(name + " mixes sets of coordinates", grpc::StatusCode::INVALID_ARGUMENT);
  }
  if (block.run_number() != events.run_number) {
    throw Error(name + " mixes runs " + std::to_string(events.run_number) + " and " +
                    std::to_string(block.run_number()),
                grpc::StatusCode::INVALID_ARGUMENT);
  }
}

}  // namespace

EventArrays Events::arrays() const {
  EventArrays arrays;
  arrays.run_number = run_number;
  arrays.event_ids = ids;
  arrays.object_offsets = offsets;
  arrays.coordinates = coordinates;
  for (int i = 0; i < 4; ++i) Set(values[i], &arrays.values[i]);
  arrays.object_classes = classes;
  arrays.measured_mask = measured;
  Set(species, &arrays.species_mask);
  Set(covariance, &arrays.covariance);
  arrays.beam = {beam_offsets, beam_energy, beam_sigma, beam_time};
  const auto set = [](const std::vector<double>* from, Column<double>* x, Column<double>* y,
                      Column<double>* z) {
    Set(from[0], x);
    Set(from[1], y);
    Set(from[2], z);
  };
  set(vertex, &arrays.vertex.x_m, &arrays.vertex.y_m, &arrays.vertex.z_m);
  Set(vertex_covariance, &arrays.vertex.covariance_m2);
  Set(groups, &arrays.vertex_group.groups);
  arrays.vertex_group.offsets = group_offsets;
  set(group_vertex, &arrays.vertex_group.x_m, &arrays.vertex_group.y_m, &arrays.vertex_group.z_m);
  Set(group_covariance, &arrays.vertex_group.covariance_m2);
  set(cluster, &arrays.cluster_position.x_m, &arrays.cluster_position.y_m, &arrays.cluster_position.z_m);
  set(polarisation, &arrays.polarisation.linear_degree, &arrays.polarisation.plane_rad,
      &arrays.polarisation.circular_degree);
  return arrays;
}

Events ReadBlockFile(const std::string& name) {
  std::ifstream file(name, std::ios::binary);
  if (!file) throw Error("cannot read " + name, grpc::StatusCode::INVALID_ARGUMENT);
  google::protobuf::io::IstreamInputStream stream(&file);
  Events events;
  for (int number = 1; true; ++number) {
    v1::EventBlock block;
    bool end = false;
    if (!google::protobuf::util::ParseDelimitedFromZeroCopyStream(&block, &stream, &end)) {
      if (end && !events.ids.empty()) return events;
      throw Error(name + (end ? " holds no events" : " is no file of event blocks"),
                  grpc::StatusCode::INVALID_ARGUMENT);
    }
    if (!events.ids.empty()) CheckSame(name, block, events);
    AppendBlock(block, &events);
    try {
      MakeBlock(events.arrays(), events.ids.size(), 0);  // looks at every length
    } catch (const Error& error) {
      throw Error(name + ", block " + std::to_string(number) + ": " + error.what() +
                      "; the blocks of a file carry the same columns",
                  grpc::StatusCode::INVALID_ARGUMENT);
    }
  }
}

}  // namespace kinegate::trigger
