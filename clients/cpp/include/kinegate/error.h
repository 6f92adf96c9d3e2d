// The one exception of the library: what went wrong, as a server or the client says it.
#pragma once

#include <grpcpp/support/status.h>

#include <map>
#include <stdexcept>
#include <string>
#include <vector>

namespace kinegate {

// FieldViolation is one field of a request that is at fault.
struct FieldViolation {
  std::string field;        // its path, such as "open.latency_budget_s"
  std::string description;  // its value and what is allowed
};

// Error is what a call or a stream failed with.
class Error : public std::runtime_error {
 public:
  explicit Error(const std::string& message, grpc::StatusCode code = grpc::StatusCode::UNKNOWN);

  // FromStatus reads a failed status with the details that a server attaches.
  static Error FromStatus(const grpc::Status& status);

  // code is the code of gRPC. UNAVAILABLE alone means that another try may help.
  grpc::StatusCode code() const { return code_; }
  // reason is the registered reason, such as "SELECTION_NOT_FOUND"; empty where no server spoke.
  const std::string& reason() const { return reason_; }
  // metadata are the values that belong to the reason.
  const std::map<std::string, std::string>& metadata() const { return metadata_; }
  // violations are the fields at fault.
  const std::vector<FieldViolation>& violations() const { return violations_; }

 private:
  grpc::StatusCode code_;
  std::string reason_;
  std::map<std::string, std::string> metadata_;
  std::vector<FieldViolation> violations_;
};

}  // namespace kinegate
