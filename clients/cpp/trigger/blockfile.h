// Files of event blocks, .kgb: each block behind its length as a varint, as `kinegate generate
// --out` writes them.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "kinegate/events.h"

namespace kinegate::trigger {

// Events are all events of a file, in the arrays that a trigger node might hold.
struct Events {
  std::vector<std::int64_t> ids;
  std::vector<std::int32_t> offsets{0};
  Coordinates coordinates = Coordinates::kMomentumAngles;
  std::vector<double> values[4];
  std::vector<std::uint8_t> classes;
  std::vector<std::uint8_t> measured;
  std::vector<std::int32_t> beam_offsets{0};
  std::vector<double> beam_energy, beam_sigma, beam_time;

  // arrays points into this object.
  EventArrays arrays() const;
  // Clear leaves no event.
  void Clear();
};

// ReadBlockFile reads a file. Throws Error that names it where it cannot be read, or mixes sets of
// coordinates.
Events ReadBlockFile(const std::string& name);

}  // namespace kinegate::trigger
