// Files of event blocks, .kgb: each block behind its length as a varint, as `kinegate generate
// --out` writes them.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "kinegate/events.h"

namespace kinegate::trigger {

// Events are all events of a file, in the arrays that a trigger node might hold. An optional column
// that is empty is absent.
struct Events {
  std::int64_t run_number = 0;
  std::vector<std::int64_t> ids;
  std::vector<std::int32_t> offsets{0};
  Coordinates coordinates = Coordinates::kMomentumAngles;
  std::vector<double> values[4];
  std::vector<std::uint8_t> classes;
  std::vector<std::uint8_t> measured;
  std::vector<std::uint8_t> species;
  std::vector<double> covariance;
  std::vector<std::int32_t> beam_offsets{0};
  std::vector<double> beam_energy, beam_sigma, beam_time;
  std::vector<double> vertex[3], vertex_covariance;
  std::vector<std::int32_t> groups, group_offsets{0};
  std::vector<double> group_vertex[3], group_covariance;
  std::vector<double> cluster[3];
  std::vector<double> polarisation[3];  // linear degree, plane, circular degree

  // arrays points into this object.
  EventArrays arrays() const;
};

// ReadBlockFile reads a file. Throws Error that names it where it cannot be read, where a block does
// not fit together, or where blocks differ in run, set of coordinates or optional columns; masks and
// beam candidates alone may come and go.
Events ReadBlockFile(const std::string& name);

}  // namespace kinegate::trigger
