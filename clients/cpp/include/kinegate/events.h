// From a caller's structure of arrays to an event block, with one copy. Sending makes the second
// and last one, into the buffers of the transport.
#pragma once

#include <cstddef>
#include <cstdint>
#include <vector>

#include "kinegate/v1/event.pb.h"

namespace kinegate {

// Column points at an array of the caller, which must live until the call that reads it returns.
// One that was never set is absent, which is not the same as empty.
template <typename T>
class Column {
 public:
  Column() = default;
  Column(const T* data, std::size_t size) : data_(data), size_(size), present_(true) {}
  Column(const std::vector<T>& values) : Column(values.data(), values.size()) {}  // NOLINT: stands for it

  const T* data() const { return data_; }
  std::size_t size() const { return size_; }
  bool present() const { return present_; }
  const T& operator[](std::size_t i) const { return data_[i]; }

 private:
  const T* data_ = nullptr;
  std::size_t size_ = 0;
  bool present_ = false;
};

// Coordinates is a set in which objects are measured; energies, momenta and masses in GeV, angles
// in radian.
enum class Coordinates {
  kEnergyMomentum,      // energy, px, py, pz
  kMomentumMass,        // px, py, pz, mass
  kTransverseMomentum,  // transverse momentum, pseudorapidity, phi, mass
  kMomentumAngles,      // momentum (a photon's energy), theta, phi
  kMomentumSlopes,      // momentum (a photon's energy), px/pz, py/pz
};

// BeamArrays are the tagged beam candidates of events. Absent offsets: there are none.
struct BeamArrays {
  Column<std::int32_t> offsets;  // first candidate of each event and the total at the end
  Column<double> energy_gev;
  Column<double> sigma_gev;
  Column<double> time_ns;  // relative to the event's own time
};

// VertexArrays are the vertices of events. Absent x: not measured.
struct VertexArrays {
  Column<double> x_m, y_m, z_m;
  Column<double> covariance_m2;  // six an event; absent: not known
};

// VertexGroupArrays say which objects come from displaced vertices, the groups. Absent groups: all
// objects come from the event vertex.
struct VertexGroupArrays {
  Column<std::int32_t> groups;   // of each object: 0 the event vertex, g the g-th group of its event
  Column<std::int32_t> offsets;  // first group of each event and the total at the end
  Column<double> x_m, y_m, z_m;  // of each group
  Column<double> covariance_m2;  // six a group; absent: not known
};

// ClusterPositionArrays are where objects hit the calorimeter, NaN where they did not. Absent x:
// not known.
struct ClusterPositionArrays {
  Column<double> x_m, y_m, z_m;
};

// PolarisationArrays are the polarisation of the beam photon of each event. Absent linear degree:
// unpolarised.
struct PolarisationArrays {
  Column<double> linear_degree, plane_rad, circular_degree;
};

// EventArrays points at events as a caller holds them. The contract of EventBlock in
// kinegate/v1/event.proto says what each column means; members that are absent are left out.
struct EventArrays {
  std::int64_t run_number = 0;
  Column<std::int64_t> event_ids;
  Column<std::int32_t> object_offsets;  // first object of each event and the total at the end
  Coordinates coordinates = Coordinates::kMomentumAngles;
  Column<double> values[4];             // the columns of the set in its order
  Column<std::uint8_t> object_classes;  // values of v1::ObjectClass
  Column<std::uint8_t> measured_mask;   // bit k: parameter k was measured; absent: all were
  Column<std::uint8_t> species_mask;    // bit 0 e, 1 mu, 2 pi, 3 K, 4 p, 5 d; absent: any
  Column<double> covariance;            // six an object; absent: not known
  BeamArrays beam;
  VertexArrays vertex;
  VertexGroupArrays vertex_group;
  ClusterPositionArrays cluster_position;
  PolarisationArrays polarisation;

  // event_count is the number of events.
  std::size_t event_count() const { return event_ids.size(); }
};

// MakeBlock copies events [first, first + count) into a block. Throws Error, which names the
// column, its length and the one that was due, where arrays do not fit together; what the numbers
// mean is the server's to judge.
v1::EventBlock MakeBlock(const EventArrays& events, std::size_t first, std::size_t count);

// MakeBlock copies all events into a block.
v1::EventBlock MakeBlock(const EventArrays& events);

}  // namespace kinegate
