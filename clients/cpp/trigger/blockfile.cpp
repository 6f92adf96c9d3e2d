#include "blockfile.h"

#include <google/protobuf/io/zero_copy_stream_impl.h>
#include <google/protobuf/util/delimited_message_util.h>

#include <cstring>
#include <fstream>

#include "kinegate/error.h"

namespace kinegate::trigger {
namespace {

constexpr std::uint8_t kAllMeasured = 7;

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
  for (std::size_t i = 1; i < offsets.size(); ++i) to->push_back(before + offsets[i]);
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
  for (std::size_t i = 0; i < columns.size(); ++i) Append(*columns[i], &events->values[i]);
  Append(block.event_ids(), &events->ids);
  AppendOffsets(block.object_offsets(), &events->offsets);
  Append(block.object_classes(), &events->classes);
  Append(block.measured_mask().masks(), &events->measured);
  events->measured.resize(events->classes.size(), kAllMeasured);
  if (block.has_beam()) {
    AppendOffsets(block.beam().offsets(), &events->beam_offsets);
    Append(block.beam().energy_gev(), &events->beam_energy);
    Append(block.beam().sigma_gev(), &events->beam_sigma);
    Append(block.beam().time_ns(), &events->beam_time);
  }
  events->beam_offsets.resize(events->ids.size() + 1, events->beam_offsets.back());
}

}  // namespace

EventArrays Events::arrays() const {
  EventArrays arrays;
  arrays.event_ids = ids;
  arrays.object_offsets = offsets;
  arrays.coordinates = coordinates;
  for (int i = 0; i < 4; ++i) {
    if (!values[i].empty()) arrays.values[i] = values[i];
  }
  arrays.object_classes = classes;
  arrays.measured_mask = measured;
  arrays.beam = {beam_offsets, beam_energy, beam_sigma, beam_time};
  return arrays;
}

void Events::Clear() {
  ids.clear();
  offsets.assign(1, 0);
  for (auto& column : values) column.clear();
  classes.clear();
  measured.clear();
  beam_offsets.assign(1, 0);
  beam_energy.clear();
  beam_sigma.clear();
  beam_time.clear();
}

Events ReadBlockFile(const std::string& name) {
  std::ifstream file(name, std::ios::binary);
  if (!file) throw Error("cannot read " + name, grpc::StatusCode::INVALID_ARGUMENT);
  google::protobuf::io::IstreamInputStream stream(&file);
  Events events;
  while (true) {
    v1::EventBlock block;
    bool end = false;
    if (!google::protobuf::util::ParseDelimitedFromZeroCopyStream(&block, &stream, &end)) {
      if (end && !events.ids.empty()) return events;
      throw Error(name + (end ? " holds no events" : " is no file of event blocks"),
                  grpc::StatusCode::INVALID_ARGUMENT);
    }
    std::vector<const std::string*> columns;
    if (!events.ids.empty() && Columns(block, &columns) != events.coordinates) {
      throw Error(name + " mixes sets of coordinates", grpc::StatusCode::INVALID_ARGUMENT);
    }
    AppendBlock(block, &events);
  }
}

}  // namespace kinegate::trigger
