// A ring of events in shared memory, from one process that reads out to one that triggers. One
// writer, one reader, no lock; a full ring loses events, and says how many.
#pragma once

#include <atomic>
#include <cstddef>
#include <cstdint>
#include <string>

#include "blockfile.h"

namespace kinegate::trigger {

constexpr std::size_t kRingObjects = 16;     // most objects of an event
constexpr std::size_t kRingCandidates = 16;  // most beam candidates of an event

// Slot is an event as it lies in the ring, measured in momentum and angles. It has no room for
// covariances, species masks, vertices, vertex groups, cluster positions or polarisation.
struct Slot {
  std::int64_t id;
  std::int64_t arrived_ns;                     // on the monotonic clock of the machine
  std::int32_t object_count, candidate_count;  // as measured; the slot keeps those it has room for
  double momentum_gev[kRingObjects], theta_rad[kRingObjects], phi_rad[kRingObjects];
  std::uint8_t classes[kRingObjects], measured[kRingObjects];
  double beam_energy_gev[kRingCandidates], beam_sigma_gev[kRingCandidates], beam_time_ns[kRingCandidates];
};

// Ring is one end of a ring.
class Ring {
 public:
  // Create makes a ring of a power of 2 of slots, in place of one that is left of that name.
  static Ring Create(const std::string& name, std::uint32_t slots);
  // Join joins a ring that another process made. Throws Error where there is none.
  static Ring Join(const std::string& name);
  ~Ring();
  Ring(Ring&& other) noexcept;
  Ring(const Ring&) = delete;
  Ring& operator=(const Ring&) = delete;
  Ring& operator=(Ring&&) = delete;

  // Write writes an event; false, and counted as lost, where the ring is full.
  bool Write(const Slot& slot);
  // Read returns the oldest event, which stays in place until Free; none where the ring is empty.
  const Slot* Read() const;
  void Free();
  // Finish says that no more events will come; finished that it was said and all are read.
  void Finish();
  bool finished() const;
  // lost_count is how many events found the ring full.
  std::int64_t lost_count() const;
  // left_out_count is how many objects and candidates of events in the ring found no room in a slot.
  std::int64_t left_out_count() const;

 private:
  struct Header;
  Ring(std::string name, void* memory, std::size_t size, bool owner);
  Slot* slots() const;

  std::string name_;
  Header* header_;
  std::size_t size_;
  bool owner_;
};

// MakeSlot takes event i of some events; objects and candidates beyond a slot's room are left out.
Slot MakeSlot(const Events& events, std::size_t i);
// LeftOut names the columns of some events that a slot has no room for; empty for none.
std::string LeftOut(const Events& events);
// AppendSlot appends the event of a slot, of whose counts no more is believed than there is room.
void AppendSlot(const Slot& slot, Events* events);

}  // namespace kinegate::trigger
