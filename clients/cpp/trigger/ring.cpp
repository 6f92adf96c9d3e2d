#include "ring.h"

#include <fcntl.h>
#include <sys/mman.h>
#include <sys/stat.h>
#include <unistd.h>

#include <algorithm>
#include <cerrno>
#include <cstring>
#include <new>
#include <utility>

#include "kinegate/error.h"

namespace kinegate::trigger {

// Header stands before the slots. Each index has a cache line of its own, so that writer and
// reader do not take it from each other.
struct Ring::Header {
  static constexpr std::uint64_t kMagic = 0x32676e69726b67;  // "gkring2"
  std::atomic<std::uint64_t> magic;
  std::uint32_t slot_count, slot_size;
  alignas(64) std::atomic<std::uint64_t> written;
  std::atomic<std::int64_t> lost, left_out;
  std::atomic<bool> finished;
  alignas(64) std::atomic<std::uint64_t> read;
};

namespace {

[[noreturn]] void Fail(const std::string& name, const std::string& what) {
  throw Error("ring " + name + ": " + what, grpc::StatusCode::INVALID_ARGUMENT);
}

void* Map(const std::string& name, int file, std::size_t size) {
  void* memory = ::mmap(nullptr, size, PROT_READ | PROT_WRITE, MAP_SHARED, file, 0);
  ::close(file);
  if (memory == MAP_FAILED) Fail(name, std::strerror(errno));
  return memory;
}

// Room is how many of a count a slot keeps.
std::int32_t Room(std::int32_t count, std::size_t most) {
  return std::clamp(count, 0, static_cast<std::int32_t>(most));
}

// Beyond is how many it does not.
std::int64_t Beyond(std::int32_t count, std::size_t most) {
  return std::max<std::int64_t>(count - static_cast<std::int64_t>(most), 0);
}

}  // namespace

Ring::Ring(std::string name, void* memory, std::size_t size, bool owner)
    : name_(std::move(name)), header_(static_cast<Header*>(memory)), size_(size), owner_(owner) {}

Ring::Ring(Ring&& other) noexcept
    : name_(std::move(other.name_)),
      header_(std::exchange(other.header_, nullptr)),
      size_(other.size_),
      owner_(other.owner_) {}

Ring::~Ring() {
  if (header_ == nullptr) return;
  ::munmap(header_, size_);
  if (owner_) ::shm_unlink(name_.c_str());
}

Ring Ring::Create(const std::string& name, std::uint32_t slots) {
  static_assert(std::atomic<std::uint64_t>::is_always_lock_free, "shared between processes");
  if (slots == 0 || (slots & (slots - 1)) != 0)
    Fail(name, std::to_string(slots) + " slots are no power of 2");
  ::shm_unlink(name.c_str());
  const int file = ::shm_open(name.c_str(), O_RDWR | O_CREAT | O_EXCL, 0600);
  if (file < 0) Fail(name, std::strerror(errno));
  const std::size_t size = sizeof(Header) + slots * sizeof(Slot);
  if (::ftruncate(file, static_cast<off_t>(size)) != 0) Fail(name, std::strerror(errno));
  void* const memory = Map(name, file, size);
  auto* header = new (memory) Header{};
  header->slot_count = slots;
  header->slot_size = sizeof(Slot);
  header->magic.store(Header::kMagic, std::memory_order_release);
  return {name, memory, size, true};
}

Ring Ring::Join(const std::string& name) {
  const int file = ::shm_open(name.c_str(), O_RDWR, 0);
  struct stat status {};
  if (file < 0 || ::fstat(file, &status) != 0) Fail(name, std::strerror(errno));
  const auto size = static_cast<std::size_t>(status.st_size);
  if (size < sizeof(Header)) Fail(name, "is no ring");
  Ring ring(name, Map(name, file, size), size, false);
  const Header* const h = ring.header_;
  if (h->magic.load(std::memory_order_acquire) != Header::kMagic || h->slot_size != sizeof(Slot) ||
      size != sizeof(Header) + h->slot_count * sizeof(Slot)) {
    Fail(name, "is no ring of this version");
  }
  return ring;
}

Slot* Ring::slots() const {
  return reinterpret_cast<Slot*>(header_ + 1);
}

bool Ring::Write(const Slot& slot) {
  const std::uint64_t at = header_->written.load(std::memory_order_relaxed);
  if (at - header_->read.load(std::memory_order_acquire) == header_->slot_count) {
    header_->lost.fetch_add(1, std::memory_order_relaxed);
    return false;
  }
  header_->left_out.fetch_add(
      Beyond(slot.object_count, kRingObjects) + Beyond(slot.candidate_count, kRingCandidates),
      std::memory_order_relaxed);
  slots()[at & (header_->slot_count - 1)] = slot;
  header_->written.store(at + 1, std::memory_order_release);
  return true;
}

const Slot* Ring::Read() const {
  const std::uint64_t at = header_->read.load(std::memory_order_relaxed);
  if (at == header_->written.load(std::memory_order_acquire)) return nullptr;
  return &slots()[at & (header_->slot_count - 1)];
}

void Ring::Free() {
  header_->read.fetch_add(1, std::memory_order_release);
}

void Ring::Finish() {
  header_->finished.store(true, std::memory_order_release);
}

bool Ring::finished() const {
  return header_->finished.load(std::memory_order_acquire) && Read() == nullptr;
}

std::int64_t Ring::lost_count() const {
  return header_->lost.load(std::memory_order_relaxed);
}

std::int64_t Ring::left_out_count() const {
  return header_->left_out.load(std::memory_order_relaxed);
}

std::string LeftOut(const Events& events) {
  std::string names;
  const auto name = [&names](const char* column, bool there) {
    if (there) names += (names.empty() ? "" : ", ") + std::string(column);
  };
  const auto restricts = [](std::uint8_t mask) { return mask != 0; };
  name("species masks", std::any_of(events.species.begin(), events.species.end(), restricts));
  name("covariances", !events.covariance.empty());
  name("vertices", !events.vertex[0].empty());
  name("vertex groups", !events.groups.empty());
  name("cluster positions", !events.cluster[0].empty());
  name("polarisation", !events.polarisation[0].empty());
  return names;
}

Slot MakeSlot(const Events& events, std::size_t i) {
  Slot slot{};
  slot.id = events.ids[i];
  const auto copy = [](const auto& from, std::int32_t first, std::int32_t count, auto* to) {
    std::copy_n(from.begin() + first, count, to);
  };
  const std::int32_t object = events.offsets[i], candidate = events.beam_offsets[i];
  slot.object_count = events.offsets[i + 1] - object;
  slot.candidate_count = events.beam_offsets[i + 1] - candidate;
  const std::int32_t objects = Room(slot.object_count, kRingObjects);
  const std::int32_t candidates = Room(slot.candidate_count, kRingCandidates);
  copy(events.values[0], object, objects, slot.momentum_gev);
  copy(events.values[1], object, objects, slot.theta_rad);
  copy(events.values[2], object, objects, slot.phi_rad);
  copy(events.classes, object, objects, slot.classes);
  copy(events.measured, object, objects, slot.measured);
  copy(events.beam_energy, candidate, candidates, slot.beam_energy_gev);
  copy(events.beam_sigma, candidate, candidates, slot.beam_sigma_gev);
  copy(events.beam_time, candidate, candidates, slot.beam_time_ns);
  return slot;
}

void AppendSlot(const Slot& slot, Events* events) {
  const auto append = [](const auto* from, std::int32_t count, auto* to) {
    to->insert(to->end(), from, from + count);
  };
  const std::int32_t objects = Room(slot.object_count, kRingObjects);
  const std::int32_t candidates = Room(slot.candidate_count, kRingCandidates);
  events->ids.push_back(slot.id);
  append(slot.momentum_gev, objects, &events->values[0]);
  append(slot.theta_rad, objects, &events->values[1]);
  append(slot.phi_rad, objects, &events->values[2]);
  append(slot.classes, objects, &events->classes);
  append(slot.measured, objects, &events->measured);
  append(slot.beam_energy_gev, candidates, &events->beam_energy);
  append(slot.beam_sigma_gev, candidates, &events->beam_sigma);
  append(slot.beam_time_ns, candidates, &events->beam_time);
  events->offsets.push_back(events->offsets.back() + objects);
  events->beam_offsets.push_back(events->beam_offsets.back() + candidates);
}

}  // namespace kinegate::trigger
