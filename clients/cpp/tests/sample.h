// An invented sample of photons, and a selection for it.
#pragma once

#include <cstdint>
#include <vector>

#include "kinegate/events.h"
#include "kinegate/v1/selection.pb.h"

namespace kinegate::testing {

// Sample holds events of two to six photons; one in 50 has a NaN. Event i is the same in every
// sample that has it.
struct Sample {
  explicit Sample(int events);
  // arrays points into this object.
  EventArrays arrays() const;

  std::vector<std::int64_t> ids;
  std::vector<std::int32_t> offsets{0};
  std::vector<double> energy, theta, phi;
  std::vector<std::uint8_t> classes;
};

// Full is a sample with every optional column, whose numbers all differ.
struct Full {
  explicit Full(int events);
  // arrays points into this object.
  EventArrays arrays() const;

  Sample sample;
  std::vector<double> numbers;
  std::vector<std::uint8_t> masks;
  std::vector<std::int32_t> groups, one_each;
};

// PairSelection has one hypothesis, a pi0 of two photons among any others.
v1::Selection PairSelection();

// OpenWith opens a stream with that selection and all entries.
v1::JudgeOpen OpenWith(v1::Selection selection);

}  // namespace kinegate::testing
