#include "source.h"

#include <algorithm>
#include <cstdint>
#include <sstream>
#include <string>
#include <thread>
#include <utility>

#include "ring.h"

namespace kinegate::trigger {
namespace {

constexpr std::chrono::microseconds kLook{20};

// FileSource keeps to a schedule whatever the server does: event i arrives at start + i / rate, so
// that a stall shows as latency of every event that it held up.
class FileSource : public Source {
 public:
  FileSource(Events events, double rate_hz, std::chrono::duration<double> time)
      : events_(std::move(events)),
        period_(1e9 / rate_hz),
        total_(static_cast<std::size_t>(rate_hz * time.count())) {}

  bool Take(std::size_t most, std::chrono::microseconds gather, Batch* batch) override {
    if (next_ == total_) return false;
    if (next_ == 0) start_ = Clock::now();
    const std::size_t in_file = next_ % events_.ids.size();
    most = std::min({most, total_ - next_, events_.ids.size() - in_file});
    std::this_thread::sleep_until(std::min(Due(next_ + most - 1), Due(next_) + gather));
    const auto now = Clock::now();
    batch->arrays = events_.arrays();
    batch->first = in_file;
    batch->arrived.clear();
    while (batch->arrived.size() < most && Due(next_) <= now) batch->arrived.push_back(Due(next_++));
    batch->count = batch->arrived.size();
    return true;
  }

 private:
  Clock::time_point Due(std::size_t event) const {
    return start_ + std::chrono::nanoseconds(static_cast<std::int64_t>(static_cast<double>(event) * period_));
  }

  const Events events_;
  const double period_;  // in ns
  const std::size_t total_;
  std::size_t next_ = 0;
  Clock::time_point start_;
};

class RingSource : public Source {
 public:
  RingSource(const std::string& name, std::chrono::duration<double> silence)
      : name_(name), silence_(silence), ring_(Ring::Join(name)) {}

  bool Take(std::size_t most, std::chrono::microseconds gather, Batch* batch) override {
    events_ = Events();
    batch->arrived.clear();
    const auto begun = Clock::now();
    while (events_.ids.size() < most) {
      const Slot* slot = ring_.Read();
      if (slot != nullptr) {
        AppendSlot(*slot, &events_);
        batch->arrived.emplace_back(std::chrono::nanoseconds(slot->arrived_ns));
        ring_.Free();
      } else if (!events_.ids.empty() && Clock::now() - batch->arrived.front() > gather) {
        break;
      } else if (ring_.finished()) {
        break;
      } else if (events_.ids.empty() && Clock::now() - begun > silence_) {
        std::ostringstream message;
        message << "ring " << name_ << ": no event for " << silence_.count()
                << " s and no end, so its writer is taken to be dead";
        fault_ = message.str();
        break;
      } else {
        std::this_thread::sleep_for(kLook);
      }
    }
    batch->arrays = events_.arrays();
    batch->first = 0;
    batch->count = events_.ids.size();
    return batch->count > 0;
  }

  std::int64_t lost_count() const override { return ring_.lost_count(); }
  std::int64_t left_out_count() const override { return ring_.left_out_count(); }
  std::string fault() const override { return fault_; }

 private:
  const std::string name_;
  const std::chrono::duration<double> silence_;
  Ring ring_;
  Events events_;
  std::string fault_;
};

}  // namespace

std::unique_ptr<Source> FromFile(const std::string& name, double rate_hz,
                                 std::chrono::duration<double> time) {
  return std::make_unique<FileSource>(ReadBlockFile(name), rate_hz, time);
}

std::unique_ptr<Source> FromRing(const std::string& name, std::chrono::duration<double> silence) {
  return std::make_unique<RingSource>(name, silence);
}

}  // namespace kinegate::trigger
