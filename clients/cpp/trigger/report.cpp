#include "report.h"

#include <algorithm>
#include <cmath>
#include <iomanip>

namespace kinegate::trigger {

void Report::Add(const Verdicts& verdicts, const std::vector<Clock::time_point>& arrived) {
  const auto now = Clock::now();
  ++blocks_;
  if (verdicts.rejected() && ++rejected_blocks_ == 1) {
    const v1::Rejection& why = verdicts.rejection();
    first_rejection_ = why.reason() + ": " + (why.field().empty() ? "" : why.field() + ": ") + why.message();
  }
  for (const auto at : arrived) {
    latencies_.push_back(std::chrono::duration<double, std::micro>(now - at).count());
  }
  for (std::size_t i = 0; i < verdicts.event_count(); ++i) {
    if (verdicts.gate(i)) ++accepted_;
    const v1::EventStatus status = verdicts.status(i);
    if (status == v1::EVENT_STATUS_EXPIRED) {
      ++late_;
    } else if (status != v1::EVENT_STATUS_JUDGED && status != v1::EVENT_STATUS_BUDGET_USED) {
      ++unsound_;
    }
  }
}

void Report::Print(std::ostream& out, const Source& source, std::int64_t breaks,
                   std::chrono::duration<double> time) {
  std::sort(latencies_.begin(), latencies_.end());
  const auto at = [this](double quantile) {
    if (latencies_.empty()) return 0.0;
    const auto rank = static_cast<std::size_t>(std::ceil(quantile * static_cast<double>(latencies_.size())));
    return latencies_[std::max<std::size_t>(rank, 1) - 1];
  };
  out << std::fixed << std::setprecision(0) << "events " << latencies_.size() << " in " << blocks_
      << " blocks, " << static_cast<double>(latencies_.size()) / time.count() << " Hz\n"
      << "latency_us p50 " << at(0.5) << " p90 " << at(0.9) << " p99 " << at(0.99) << " p99.9 " << at(0.999)
      << " max " << at(1) << "\n"
      << "accepted " << accepted_ << " late " << late_ << " unsound " << unsound_ << " lost "
      << source.lost_count() << " rejected_blocks " << rejected_blocks_ << " breaks " << breaks
      << " objects_left_out " << source.left_out_count() << "\n";
  if (rejected_blocks_ > 0) out << "first rejection: " << first_rejection_ << "\n";
}

}  // namespace kinegate::trigger
