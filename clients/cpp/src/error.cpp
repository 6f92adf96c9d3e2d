#include "kinegate/error.h"

#include "google/rpc/error_details.pb.h"
#include "google/rpc/status.pb.h"

namespace kinegate {

Error::Error(const std::string& message, grpc::StatusCode code) : std::runtime_error(message), code_(code) {}

Error Error::FromStatus(const grpc::Status& status) {
  Error error(status.error_message(), status.error_code());
  google::rpc::Status details;
  if (!details.ParseFromString(status.error_details())) return error;
  for (const auto& detail : details.details()) {
    google::rpc::ErrorInfo info;
    google::rpc::BadRequest request;
    if (detail.UnpackTo(&info)) {
      error.reason_ = info.reason();
      error.metadata_.insert(info.metadata().begin(), info.metadata().end());
    } else if (detail.UnpackTo(&request)) {
      for (const auto& violation : request.field_violations()) {
        error.violations_.push_back({violation.field(), violation.description()});
      }
    }
  }
  return error;
}

}  // namespace kinegate
