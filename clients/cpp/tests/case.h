// The cases of testdata/rpc and their rules of comparison, which the README there states.
#pragma once

#include <google/protobuf/struct.pb.h>

#include <map>
#include <string>

#include "kinegate/v1/verdict.pb.h"

namespace kinegate::testing {

using Json = google::protobuf::Value;

// kTolerance is the relative tolerance of numbers.
constexpr double kTolerance = 4e-15;

// ReadCases reads the cases of a folder by their names.
std::map<std::string, Json> ReadCases(const std::string& folder);
// CaseFile is the path of a file of the cases.
std::string CaseFile(const std::string& name);
// Member is a member of an object, null where it is absent.
const Json& Member(const Json& object, const std::string& name);
// Fill fills a message from its JSON form.
void Fill(const Json& form, google::protobuf::Message* message);
// Form is the JSON form of a message.
Json Form(const google::protobuf::Message& message);
// Differ says how what came differs from what is due, empty where it agrees: members named must
// be there and agree, lists have the same length, numbers agree within the tolerance, null is
// absent.
std::string Differ(const std::string& path, const Json& due, const Json& came, double tolerance);

}  // namespace kinegate::testing
